"""The day on which waivers are judged: today, or the one that is asked for, so that a report can be made again."""

from __future__ import annotations

import argparse
import datetime


def add_day(parser: argparse.ArgumentParser) -> None:
    """Declare the option."""
    parser.add_argument(
        "--today", type=_day, metavar="DAY", help="judge waivers as on this day, such as 2031-12-31 (usual: today)"
    )


def _day(text: str) -> datetime.date:
    try:
        return datetime.date.fromisoformat(text)
    except ValueError:
        raise argparse.ArgumentTypeError(f"{text} is no day; write year-month-day, such as 2031-12-31") from None
