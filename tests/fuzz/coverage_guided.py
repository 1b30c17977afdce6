"""Coverage-guided fuzzing of the loader, of quantities, and of settings and waivers (needs ``tidegate[fuzz]``).

    python -m tests.fuzz.coverage_guided loader --seconds 300 --seed 1 --keep FOLDER

Inputs that reach new lines are kept and mutated further; they begin with the examples, and a dictionary holds the keys
and the units of the schema. What is found is told and kept, and the run goes on.
"""

# ruff: noqa: E402 - what is to be instrumented is imported before all else

from __future__ import annotations

import argparse
import json
import math
import random
import re
import resource
import sys
import tempfile
import time
from collections import Counter
from collections.abc import Callable
from decimal import Decimal
from pathlib import Path
from typing import Any, Final

try:
    import atheris
except ImportError:
    sys.exit("coverage-guided fuzzing needs atheris: pip install 'tidegate[fuzz]' (Linux and macOS)")

_CODE: Final = [
    "tidegate.lint.description", "tidegate.lint.quantity", "tidegate.lint.quantity_faults", "tidegate.lint.units",
    "tidegate.lint.found", "tidegate.lint.settings", "tidegate.lint.waivers", "yaml",
]  # fmt: skip

with atheris.instrument_imports(include=_CODE):
    import tidegate.lint.description.load
    import tidegate.lint.description.schema_faults
    import tidegate.lint.description.syntax_faults
    import tidegate.lint.quantity_faults
    import tidegate.lint.settings
    from tidegate.lint.quantity import QuantityError, Span, parse, pattern, show, show_apart
    from tidegate.lint.units import POWERS, SCALED, Dimension

from tests.fuzz import cases, grammar, mutate_text
from tests.fuzz.check_judging import CATALOGUE, TODAY
from tests.fuzz.check_loading import check_faults, loaded
from tests.fuzz.trouble import Trouble, no_number, watched
from tidegate.lint.description.load import Loaded
from tidegate.lint.description.model.description import Waiver
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.engine import review
from tidegate.lint.waivers import margin_of

_MOST_MEMORY: Final = 3 * 2**30
_TOLD_EVERY: Final = 200
_MOST_BYTES: Final = 6000
_MOST_REVIEWED: Final = 1500  # larger ones are left to the campaign: here the loader is what counts
_DIMENSIONS: Final = [each for each in Dimension if each.units]
_SPANS: Final = {kind.dimension: kind for kind in Span.__subclasses__()}


def _loader(data: bytes, folder: Path, found: list[Trouble]) -> None:
    file = folder / "chip.yaml"
    file.write_bytes(data)
    with watched("load", found):
        said = loaded(file, found)
    if not found and isinstance(said, Loaded) and len(data) < _MOST_REVIEWED:
        with watched("review", found):
            for fault in review(said, CATALOGUE, today=TODAY).faults:
                found.append(Trouble("rule fault", fault.rule, f"{fault.error}\non {fault.subject}"))


def _quantity(data: bytes, _: Path, found: list[Trouble]) -> None:
    if not data:
        return
    dimension = _DIMENSIONS[data[0] % len(_DIMENSIONS)]
    text = data[1:].decode("utf-8", "surrogateescape")
    with watched("quantity", found):
        try:
            value = parse(text, dimension)
        except QuantityError as error:
            if "\n" in str(error) or not str(error).isprintable() or "; " not in str(error):
                found.append(Trouble("odd message", "quantity", f"{dimension.value}\n{error!r} of {text!r}"))
            return
        _check_value(text, value, dimension, found)
        margin = margin_of(f"-{text}", dimension)
        if margin is not None and margin not in (-value, 0.0):
            found.append(Trouble("margin", "waiver", f"read otherwise\n{text!r}: {margin}, not {-value}"))
    with watched("span", found):
        ends = [part.strip() for part in text.split("/")][:3]
        try:
            span = _SPANS[dimension].read(dict(zip(("min", "typ", "max"), ends, strict=False)))
        except QuantityError:
            return
        known = [end for end in (span.least, span.typical, span.most) if end is not None]
        if known != sorted(known):
            found.append(Trouble("order", "span", f"out of order\n{text!r}"))


def _check_value(text: str, value: float, dimension: Dimension, found: list[Trouble]) -> None:
    """A value is that of its text in exact decimal arithmetic, fits the pattern of the schema, and can be shown."""
    if not math.isfinite(value) or re.fullmatch(pattern(dimension), text) is None:
        found.append(Trouble("accepted", "quantity", f"{dimension.value}\n{text!r} read as {value}"))
        return
    number, unit = re.fullmatch(r"([+-]?[0-9.]+(?:[eE][+-]?[0-9]+)?) ?(.*)", text).groups()  # type: ignore[union-attr]
    if unit in POWERS[dimension]:
        exact = Decimal(number).scaleb(POWERS[dimension][unit])
    else:
        factor, divisor, offset = map(Decimal, SCALED[dimension][unit])
        exact = Decimal(number) * factor / divisor + offset
    if (
        abs(Decimal(value) - exact) > Decimal("1e-12") * max(abs(exact), Decimal("1e-290"))
        and dimension.signed is False
    ):
        found.append(Trouble("value", "quantity", f"{dimension.value}\n{text!r} read as {value}, is {exact}"))
    for shown in (show(value, dimension), *show_apart(value, value * 1.0001, dimension)):
        if no_number(shown, "") or len(shown) > 60:
            found.append(Trouble("shown", "quantity", f"{dimension.value}\n{value!r} as {shown!r}"))


def _settings(data: bytes, folder: Path, found: list[Trouble]) -> None:
    content, _, waivers = data.partition(b"\n=====\n")
    file = folder / "tidegate.settings.yaml"
    file.write_bytes(content)
    (folder / "waivers.yaml").write_bytes(waivers)
    with watched("settings", found):
        try:
            settings = tidegate.lint.settings.load_settings(file, shown=file.name)
        except DescriptionError as error:
            check_faults(error.faults, file, found)
            return
        if any(not isinstance(placed.waiver, Waiver) for placed in settings.waived):
            found.append(Trouble("waiver", "settings", "is none"))


_TARGETS: Final[dict[str, Callable[[bytes, Path, list[Trouble]], None]]] = {
    "loader": _loader, "quantity": _quantity, "settings": _settings,
}  # fmt: skip


def _corpus(target: str) -> list[bytes]:
    choose = random.Random(1)
    if target == "loader":
        small = [cases.written(grammar.description(choose), as_json=bool(n % 2)) for n in range(30)]
        parts = [part for text in cases.texts() for part in re.split(rb"\n(?=[a-z_]+:)", text)]
        return [text for text in (*cases.texts(), *small, *parts) if len(text) < _MOST_BYTES]
    if target == "settings":
        waivers = b"waivers:\n  - {rule: bypass/readable, element: a, why: b, agreed_by: c, until: '2031-12-31'}\n"
        return [
            cases.written({"waivers": ["waivers.yaml"], **grammar.settings(choose)}, as_json=False)
            + b"\n=====\n"
            + waivers
            for _ in range(20)
        ]
    return [
        bytes([number]) + text.encode()
        for number, dimension in enumerate(_DIMENSIONS)
        for text in (
            dimension.example,
            *(f"{mantissa} {unit}" for unit in dimension.units for mantissa in ("1.5e3", "0")),
        )
    ]


def _dictionary(target: str) -> str:
    """Keys, words and units of the schema, and signs of YAML, in the form that libFuzzer reads."""
    units = {unit for dimension in Dimension for unit in dimension.units}
    words = {
        "nan",
        "inf",
        "e308",
        "e-324",
        "e999999999",
        "degC",
        "\u00b5",
        "\u03a9",
        "\u2126",
        ",",
        "1_000",
        " to ",
        "..",
        "+",
    }
    if target != "quantity":
        schema = json.loads(
            (
                grammar.ROOT / "schema" / f"{'settings' if target == 'settings' else 'description'}.schema.json"
            ).read_text()
        )
        words |= {f"{key}:" for key in re.findall(r'"([a-z_]{3,30})"', json.dumps(schema))}
        words |= {
            "&a ",
            "*a",
            "<<:",
            "!!",
            "? ",
            "|\n",
            ">\n",
            "---\n",
            "include: [",
            "{",
            "}",
            "[",
            "]",
            "\t",
            "none",
            "off",
        }
    escaped = ("".join(f"\\x{byte:02x}" for byte in word.encode()) for word in sorted(units | words))
    return "".join(f'"{word}"\n' for word in escaped)


def main() -> None:
    """Run one target until the time is up."""
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("target", choices=tuple(_TARGETS))
    parser.add_argument("--seconds", type=int, default=60, help="wall time")
    parser.add_argument("--executions", type=int, default=-1, help="end after so many")
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--keep", type=Path, required=True, help="folder for what is found, and for the numbers")
    options = parser.parse_args()
    resource.setrlimit(resource.RLIMIT_AS, (_MOST_MEMORY, _MOST_MEMORY))
    options.keep.mkdir(parents=True, exist_ok=True)
    work = Path(tempfile.mkdtemp(prefix="fuzz"))
    corpus = work / "corpus"
    corpus.mkdir()
    for number, content in enumerate(_corpus(options.target)):
        (corpus / f"seed{number}").write_bytes(content)
    (work / "words.dict").write_text(_dictionary(options.target), "utf-8")
    run = _Run(options, work)
    arguments = [
        sys.argv[0], str(corpus), f"-dict={work / 'words.dict'}", f"-max_total_time={options.seconds}",
        f"-seed={options.seed}", f"-max_len={_MOST_BYTES if options.target == 'loader' else 2000}", "-timeout=120",
        "-rss_limit_mb=0", "-print_final_stats=1", f"-runs={options.executions}",
    ]  # fmt: skip
    mutator = {} if options.target == "quantity" else {"custom_mutator": _mutated}
    atheris.Setup(arguments, run.one, **mutator)
    atheris.Fuzz()


def _mutated(data: bytes, most: int, seed: int) -> bytes:
    """Half of the mutations know lines and signs of YAML."""
    choose = random.Random(seed)
    if choose.random() < 0.5:
        changed: bytes = atheris.Mutate(data, most)
        return changed
    return mutate_text.mutated(choose, data, cases.texts())[:most]


class _Run:
    """Counts, tells each sort of trouble once, and keeps its input."""

    def __init__(self, options: argparse.Namespace, work: Path) -> None:
        self.options = options
        self.work = work
        self.executions = 0
        self.seen: Counter[str] = Counter()

    def one(self, data: bytes) -> None:
        """One execution."""
        found: list[Trouble] = []
        _TARGETS[self.options.target](data, self.work, found)
        self.executions += 1
        for trouble in found:
            self.seen[trouble.signature] += 1
            if self.seen[trouble.signature] == 1:
                print(f"[{self.options.target}] {trouble.signature}\n{trouble.story[:1500]}\n", flush=True)
                name = f"{self.options.target}-{self.options.seed}-{self.executions}"
                (self.options.keep / name).write_bytes(data)
        if self.executions % _TOLD_EVERY == 0:
            self._tell()

    def _tell(self) -> None:
        numbers: dict[str, Any] = {
            "kind": f"coverage {self.options.target}", "seed": self.options.seed,
            "cpu_s": round(time.process_time()), "cases": self.executions, "sorts": dict(self.seen),
        }  # fmt: skip
        name = f"numbers-{self.options.target}-{self.options.seed}.json"
        (self.options.keep / name).write_text(json.dumps(numbers) + "\n", "utf-8")


if __name__ == "__main__":
    main()
