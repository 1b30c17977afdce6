"""Files that are no text, or hold no description. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, Bad

TEXT: Final = (
    Bad(
        "an empty file",
        "",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
    Bad(
        "comments alone",
        "# nothing yet\n",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
    Bad(
        "null alone",
        "~\n",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
    Bad(
        "a list",
        "- a\n- b\n",
        "main.yaml:1:1: the file holds a list; begin with a section, such as rails:",
    ),
    Bad(
        "a text",
        "hello\n",
        "main.yaml:1:1: the file holds a text; begin with a section, such as rails:",
    ),
    Bad(
        "sections without elements",
        "subsystem: x\nrails:\n",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
    Bad(
        "a second document",
        RAIL + "---\nrails:\n  avdd:\n    nominal: 1.8 V\n",
        "main.yaml:4:1: a second document begins here; keep one description in a file; remove the ---",
    ),
    Bad(
        "a text in UTF-16 with its mark",
        RAIL.encode("utf-16"),
        "main.yaml:1:1: the file is UTF-16 or UTF-32; save it as UTF-8",
    ),
    Bad(
        "a text in UTF-16, little end first, without a mark",
        RAIL.encode("utf-16-le"),
        "main.yaml:1:1: the file is UTF-16 or UTF-32; save it as UTF-8",
    ),
    Bad(
        "a text in UTF-16, big end first, without a mark",
        RAIL.encode("utf-16-be"),
        "main.yaml:1:1: the file is UTF-16 or UTF-32; save it as UTF-8",
    ),
    Bad("a text in UTF-32", RAIL.encode("utf-32"), "main.yaml:1:1: the file is UTF-16 or UTF-32; save it as UTF-8"),
    Bad(
        "a text in Latin-1",
        RAIL.encode() + "    note: gemessen bei 25 °C\n".encode("latin-1"),
        "main.yaml:4:27: byte 0xB0 is not UTF-8; save the file as UTF-8",
    ),
    Bad(
        "a text in the code page of Windows",
        RAIL.encode() + b"    note: \x93see review\x94\n",
        "main.yaml:4:11: byte 0x93 is not UTF-8; save the file as UTF-8",
    ),
    Bad(
        "half a letter at the end",
        RAIL.encode() + b"    note: \xc3",
        "main.yaml:4:11: byte 0xC3 is not UTF-8; save the file as UTF-8",
    ),
    Bad(
        "a letter in more bytes than it needs",
        RAIL.encode() + b"    note: \xc0\xaf\n",
        "main.yaml:4:11: byte 0xC0 is not UTF-8; save the file as UTF-8",
    ),
    Bad(
        "half of a surrogate pair in bytes",
        RAIL.encode() + b"    note: \xed\xa0\xbd\n",
        "main.yaml:4:11: byte 0xED is not UTF-8; save the file as UTF-8",
    ),
    Bad(
        "a packed file",
        b"\x1f\x8b\x08\x00\x00\x00\x00\x00\x02\xff",
        "main.yaml: the file is no text; name a description in YAML or JSON",
    ),
    Bad(
        "a picture",
        b"\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR",
        "main.yaml: the file is no text; name a description in YAML or JSON",
    ),
    Bad("a program", b"\x7fELF\x02\x01\x01\x00", "main.yaml: the file is no text; name a description in YAML or JSON"),
    Bad(
        "a null byte",
        RAIL.encode() + b"    note: a\x00b\n",
        "main.yaml:4:12: the character U+0000 is not allowed; remove it",
    ),
    Bad(
        "a null byte at the end",
        RAIL.encode() + b"\x00",
        "main.yaml:4:1: the character U+0000 is not allowed; remove it",
    ),
    Bad("null bytes alone", b"\x00" * 20, "main.yaml: the file is no text; name a description in YAML or JSON"),
    Bad("a form feed", RAIL + "\x0cdomains: {}\n", "main.yaml:4:1: the character U+000C is not allowed; remove it"),
    Bad("a bell", RAIL + "    note: ring\x07\n", "main.yaml:4:15: the character U+0007 is not allowed; remove it"),
    Bad(
        "an escape for the terminal",
        RAIL + "    note: \x1b[31mred\n",
        "main.yaml:4:11: the character U+001B is not allowed; remove it",
    ),
    Bad(
        "a mark of byte order in the middle",
        RAIL + "\ufeffdomains: {}\n",
        "main.yaml:4:1: the character U+FEFF is not allowed; remove it",
    ),
    Bad(
        "two marks of byte order",
        "\ufeff\ufeff" + RAIL,
        "main.yaml:1:1: the character U+FEFF is not allowed; remove it",
    ),
    Bad(
        "a line separator",
        RAIL + "    note: one\u2028two\n",
        "main.yaml:4:14: the character U+2028 is not allowed; remove it",
    ),
    Bad(
        "a next-line character",
        RAIL + "    note: one\x85two\n",
        "main.yaml:4:14: the character U+0085 is not allowed; remove it",
    ),
    Bad(
        "a character that is none",
        RAIL + "    note: \uffff\n",
        "main.yaml:4:11: the character U+FFFF is not allowed; remove it",
    ),
    Bad(
        "a mark of byte order alone",
        b"\xef\xbb\xbf",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
    Bad("blanks alone", "   \n  \n", "main.yaml: the file describes no element; tidegate start writes a starter"),
    Bad(
        "the end of a document alone",
        "...\n",
        "main.yaml:1:1: the text cannot be read as YAML from here on; compare it with the lines above",
    ),
    Bad(
        "the beginning of a document alone",
        "---\n",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
    Bad("a number", "42\n", "main.yaml:1:1: the file holds a text; begin with a section, such as rails:"),
    Bad("a text in quotes", "'rails'\n", "main.yaml:1:1: the file holds a text; begin with a section, such as rails:"),
    Bad("an empty mapping", "{}\n", "main.yaml: the file describes no element; tidegate start writes a starter"),
    Bad("an empty list", "[]\n", "main.yaml:1:1: the file holds a list; begin with a section, such as rails:"),
    Bad(
        "a page of the web",
        "<!DOCTYPE html>\n<html><body>404</body></html>\n",
        "main.yaml:1:1: the file holds a text; begin with a section, such as rails:",
    ),
    Bad(
        "a table",
        "rail,nominal\navdd,1.8 V\n",
        "main.yaml:1:1: the file holds a text; begin with a section, such as rails:",
    ),
    Bad(
        "a settings file of another kind",
        "[rails]\navdd = 1.8\n",
        "main.yaml:2:1: text after the end of the description; keep one description in a file; remove it",
    ),
    Bad(
        "keys of one's own alone",
        "x-mine: {a: 1}\n",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
)
