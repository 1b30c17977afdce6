"""Mutations of a file as text: bytes, characters, lines, and two files joined at random."""

from __future__ import annotations

import random
from collections.abc import Sequence
from typing import Final

_PIECES: Final = (
    b":", b": ", b"- ", b"{", b"}", b"[", b"]", b",", b"#", b" #", b"&a ", b"*a", b"!!str ", b"!x ", b"|", b">",
    b"%", b"@", b"`", b'"', b"'", b"\\", b"\t", b"\n", b"\r", b"\r\n", b"\n\n", b"---\n", b"...\n", b"? ", b"<<: ",
    b"\x00", b"\x1b[31m", b"\x7f", b"\xff", b"\xc3\xa9", b"\xe2\x80\xae", b"\xe2\x80\xa8", b"\xc2\x85",
    b"\xef\xbb\xbf", b"\xf0\x9f\x8c\x8a", b"\xed\xa0\x80", b"\xc2\xa0", b"null", b"~", b"true", b"off", b"nan",
    b".inf", b"1e999", b"-1", b"0", b"010", b"1:30", b"1_000", b"0x10", b" V", b" mV", b"none", b"x-",
    b"include: [a.yaml]\n", b"\n  ", b"  ", b"<<<<<<< a\n",
)  # fmt: skip


def mutated(choose: random.Random, content: bytes, others: Sequence[bytes]) -> bytes:
    """The content after one to five mutations."""
    for _ in range(choose.choice((1, 1, 1, 2, 3, 5))):
        content = choose.choice((_bytes, _bytes, _lines, _lines, _lines, _whole))(choose, content, others)
    return content


def _bytes(choose: random.Random, content: bytes, _: Sequence[bytes]) -> bytes:
    at = choose.randint(0, len(content))
    match choose.randint(0, 4):
        case 0:  # a bit
            at = min(at, len(content) - 1)
            return (
                content
                if at < 0
                else content[:at] + bytes([content[at] ^ (1 << choose.randint(0, 7))]) + content[at + 1 :]
            )
        case 1:  # something put in
            return content[:at] + choose.choice(_PIECES) * choose.choice((1, 1, 1, 2, 40)) + content[at:]
        case 2:  # something in place of something
            return content[:at] + choose.choice(_PIECES) + content[at + choose.randint(1, 8) :]
        case 3:  # something taken out
            return content[:at] + content[at + choose.choice((1, 1, 2, 5, 30)) :]
        case _:  # one sign everywhere
            sign, other = choose.choice(
                ((b": ", b":"), (b" ", b"\t"), (b"\n", b"\r\n"), (b"\n", b"\r"), (b"'", b'"'), (b"  ", b" "))
            )
            return content.replace(sign, other, choose.choice((1, 3, -1)))


def _lines(choose: random.Random, content: bytes, others: Sequence[bytes]) -> bytes:
    lines = content.splitlines(keepends=True) or [b""]
    at, to = choose.randrange(len(lines)), choose.randrange(len(lines))
    some = slice(at, at + choose.choice((1, 1, 2, 5)))
    match choose.randint(0, 6):
        case 0:
            del lines[some]
        case 1:
            lines[to:to] = lines[some]
        case 2:
            lines[at], lines[to] = lines[to], lines[at]
        case 3:
            lines[some] = [b" " * choose.randint(1, 4) + line for line in lines[some]]
        case 4:
            lines[some] = [
                line[min(choose.randint(1, 2), len(line) - len(line.lstrip(b" "))) :] for line in lines[some]
            ]
        case 5:
            lines[at] = lines[at].rstrip(b"\r\n") + b" " + lines[to]
        case _:
            other = choose.choice(others).splitlines(keepends=True) or [b""]
            there = choose.randrange(len(other))
            lines[some] = other[there : there + choose.choice((1, 3, 10))]
    return b"".join(lines)


def _whole(choose: random.Random, content: bytes, others: Sequence[bytes]) -> bytes:
    at = choose.randint(0, len(content))
    if choose.random() < 0.5:
        return content[:at]
    other = choose.choice(others)
    return content[:at] + other[choose.randint(0, len(other)) :]
