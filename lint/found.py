"""What was found in a file, as a message repeats it: on one line, short, and with nothing a terminal would obey."""

from __future__ import annotations

from typing import Final

MOST_SHOWN: Final = 60
"""Longest text from a file that a message repeats, in characters."""


def quoted(text: str) -> str:
    """A text in quotes, its unprintable characters escaped, its middle part left out where it is long."""
    shown = repr(text if len(text) <= MOST_SHOWN else text[:MOST_SHOWN] + "...")
    return shown if len(shown) <= MOST_SHOWN + 5 else f"{shown[: MOST_SHOWN - 2]}...{shown[0]}"


def escaped(text: str) -> str:
    """A text without quotes, its unprintable characters escaped: for names that stand in a message as they are."""
    if text.isprintable():
        return text
    return "".join(sign if sign.isprintable() else repr(sign)[1:-1] for sign in text)


def with_space(key: str, value: str) -> str:
    """What to write in place of a key and a value with no space between them; in words where that would be long."""
    if len(key) + len(value) >= MOST_SHOWN:
        return "write a space after the colon"
    return f"write {escaped(key)}: {escaped(value)}"


def found(value: object) -> str:
    """A value of a description, in few words."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, dict):
        return "a mapping" if value else "an empty mapping"
    if isinstance(value, list):
        return "a list" if value else "an empty list"
    return quoted(value) if isinstance(value, str) else str(value)


def raised(error: BaseException) -> str:
    """What foreign code raised: its kind and its words, which it may fail to give."""
    name = type(error).__name__
    try:
        return f"{name}: {error}".removesuffix(": ")
    except Exception:
        return f"{name}, which does not say what it is about"
