"""The limits of the tool, in one place: beyond each of them it says so, and does not try.

They lie far above what a description of real silicon needs, and below what would keep the tool from answering in
sensible time.  ``LIMITS`` says each of them in the words of the reference (``schema/README.md``).
"""

from __future__ import annotations

from typing import Final

MOST_BYTES: Final = 256 * 2**20
"""Largest file that is read, and most of all files of one description together, in bytes."""
MOST_WAIT_S: Final = 30.0
"""Longest time that a pipe may stay silent while it is read, in s."""
MOST_DEPTH: Final = 32
"""Deepest nesting of mappings and lists."""
MOST_EXPANDED: Final = 1_000_000
"""How many characters the aliases of a file may always stand for."""
MOST_GROWTH: Final = 16
"""How many times its own length a longer file may reach when its aliases are expanded."""
MOST_FILES: Final = 1000
"""Most files that one description may be split into."""
MOST_INCLUDED: Final = 16
"""Longest chain of files that include one another."""
MOST_TEXT: Final = 10_000
"""Longest text of a value, in characters."""
MOST_NAME: Final = 64
"""Longest name of an element, in characters; the schema says the same."""
MOST_QUANTITY: Final = 64
"""Longest text of a quantity, in characters."""
LARGEST_NUMBER: Final = 1e300
"""Greatest size of a plain number."""
MOST_IN_A_ROW: Final = 1000
"""Most elements of which each leans on the next, or drives it; and most that lean on each other in a ring."""
MOST_WATCHING: Final = 100
"""Most detectors that watch one rail."""
MOST_FAULTS: Final = 1000
"""Most faults of one description that are told."""
MOST_PACK_BYTES: Final = 2**20
"""Largest file of a rule pack, in bytes."""
MOST_PACK_S: Final = 5.0
"""Longest time that loading a pack, or one judgement of it, may take, in s."""

LIMITS: Final = (
    ("a file, and all files of one description together", f"{MOST_BYTES // 2**20} MiB"),
    ("silence of a pipe that is read", f"{MOST_WAIT_S:g} s"),
    ("nesting of mappings and lists", f"{MOST_DEPTH} levels"),
    (
        "what the aliases (`*`) of a file may make of it",
        f"{MOST_EXPANDED} characters, or {MOST_GROWTH} times the file up to {MOST_BYTES // 2**20} MiB",
    ),
    ("files of one description", f"{MOST_FILES}"),
    ("files that include one another in a chain", f"{MOST_INCLUDED}"),
    ("a name", f"{MOST_NAME} characters"),
    ("a quantity", f"{MOST_QUANTITY} characters"),
    ("any other text", f"{MOST_TEXT} characters"),
    ("a plain number", f"{LARGEST_NUMBER:g}"),
    ("elements in a row, of which each leans on the next or drives it", f"{MOST_IN_A_ROW}"),
    ("elements in a ring that lean on each other", f"{MOST_IN_A_ROW}"),
    ("detectors of one rail", f"{MOST_WATCHING}"),
    ("faults of one description that are told", f"{MOST_FAULTS}"),
    ("the file of a rule pack", f"{MOST_PACK_BYTES // 2**20} MiB"),
    ("loading a rule pack; one judgement of a rule in it", f"{MOST_PACK_S:g} s"),
)
"""What is limited, and to how much."""
