"""No record of the physics can be changed once it is made: a number that was checked stays as it was."""

from __future__ import annotations

import importlib
import pkgutil

import msgspec
import pytest

from tidegate.lint import physics


def records() -> list[type[msgspec.Struct]]:
    found = []
    for module in pkgutil.iter_modules(physics.__path__, physics.__name__ + "."):
        for one in vars(importlib.import_module(module.name)).values():
            if isinstance(one, type) and issubclass(one, msgspec.Struct) and one.__module__ == module.name:
                found.append(one)
    return found


RECORDS = records()


def test_the_records_are_found() -> None:
    assert {"Window", "Contributor", "Junction", "Wear"} <= {record.__name__ for record in RECORDS}


@pytest.mark.parametrize("record", RECORDS, ids=lambda record: f"{record.__module__.split('.')[-1]}-{record.__name__}")
def test_a_record_cannot_be_changed(record: type[msgspec.Struct]) -> None:
    assert record.__struct_config__.frozen
