"""Text from a description or a file name, made safe to show: no control, format or direction characters."""

from __future__ import annotations

import re
from typing import Final

UNSAFE: Final = re.compile(
    "[\x00-\x1f\x7f-\x9f\xad\u061c\u180e\u200b-\u200f\u2028-\u202e\u2060-\u206f\ufeff\ufff9-\ufffb"
    "\ud800-\udfff\U000e0000-\U000e007f]"
)
"""Controls, soft hyphen, zero-width and direction marks, line separators, byte order mark, surrogates, tags."""


def plain(text: str) -> str:
    """The text with every character that could move a cursor or turn a line round written out as its number."""
    return UNSAFE.sub(lambda found: f"\\u{ord(found[0]):04x}", text)
