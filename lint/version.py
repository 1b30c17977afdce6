"""The version of the tool, in the one place from which everything takes it."""

from typing import Final

VERSION: Final = "0.1.0"
