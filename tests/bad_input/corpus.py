"""All bad input that the tests know, by kind."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Final

from tests.bad_input.arguments import ARGUMENTS
from tests.bad_input.beyond_limits import BEYOND_LIMITS, ROWS
from tests.bad_input.contradictions import CONTRADICTIONS
from tests.bad_input.form import Bad
from tests.bad_input.includes import INCLUDES
from tests.bad_input.keys import KEYS
from tests.bad_input.keys_twice import KEYS_TWICE
from tests.bad_input.misbehaving_rules import MISBEHAVING_RULES
from tests.bad_input.names import NAMES
from tests.bad_input.none import NONE
from tests.bad_input.numbers import NUMBERS
from tests.bad_input.output_paths import OUTPUT_PATHS
from tests.bad_input.pack_rules import PACK_RULES
from tests.bad_input.packs import PACKS
from tests.bad_input.quantities import QUANTITIES
from tests.bad_input.settings import SETTINGS
from tests.bad_input.shapes import SHAPES
from tests.bad_input.spans import SPANS
from tests.bad_input.starters import STARTERS
from tests.bad_input.syntax import SYNTAX
from tests.bad_input.text import TEXT
from tests.bad_input.together import TOGETHER
from tests.bad_input.units import UNITS
from tests.bad_input.values import VALUES
from tests.bad_input.waivers import WAIVERS

BY_KIND: Final[Mapping[str, Sequence[Bad]]] = {
    "text": TEXT,
    "syntax": SYNTAX,
    "keys": (*KEYS, *KEYS_TWICE),
    "names": NAMES,
    "none": NONE,
    "quantities": (*QUANTITIES, *UNITS, *SPANS),
    "values": (*VALUES, *NUMBERS, *SHAPES),
    "contradictions": CONTRADICTIONS,
    "together": TOGETHER,
    "includes": INCLUDES,
    "beyond limits": (*BEYOND_LIMITS, *ROWS),
    "settings": SETTINGS,
    "waivers": WAIVERS,
    "packs": (*PACKS, *PACK_RULES, *MISBEHAVING_RULES),
    "output paths": OUTPUT_PATHS,
    "arguments": (*ARGUMENTS, *STARTERS),
}
