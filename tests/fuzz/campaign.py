"""A campaign: cases of one kind after another from a seed, until the time is up; each sort of trouble is kept once.

python -m tests.fuzz.campaign grammar --seed 1 --seconds 600 --keep FOLDER
python -m tests.fuzz.campaign grammar --seed 1 --only 17        # one case again, with its files
"""

from __future__ import annotations

import argparse
import json
import random
import resource
import sys
import time
import warnings
from collections import Counter
from pathlib import Path

from tests.fuzz.cases import KINDS, Case
from tests.fuzz.minimise import minimised
from tests.fuzz.run_case import run_case
from tests.fuzz.trouble import Trouble

_MOST_MEMORY = 3 * 2**30
_MOST_MINIMISING_S = 12.0


def chooser(seed: int, number: int) -> random.Random:
    """The choices of one case, the same each time."""
    return random.Random(f"{seed}/{number}")


def case_of(kind: str, seed: int, number: int) -> tuple[Case, random.Random]:
    """A case, and the choices that remain for what is tried with it."""
    choose = chooser(seed, number)
    return KINDS[kind](choose), choose


def main() -> None:
    """Run cases, tell what is found as it is found, and the numbers at the end."""
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("kind", choices=tuple(KINDS))
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--seconds", type=float, default=60.0, help="CPU time")
    parser.add_argument("--only", type=int, help="the number of one case")
    parser.add_argument("--keep", type=Path, help="folder for the files of what is found, and for the numbers")
    parser.add_argument("--commands", type=int, default=2, help="commands tried on each file")
    options = parser.parse_args()
    resource.setrlimit(resource.RLIMIT_AS, (_MOST_MEMORY, _MOST_MEMORY))
    warnings.simplefilter("error")  # a user would see them
    if options.only is not None:
        case, choose = case_of(options.kind, options.seed, options.only)
        for name, content in case.files.items():
            print(f"==> {name}\n{content.decode('utf-8', 'replace')}")
        for trouble in run_case(case, choose, Counter(), commands=options.commands):
            print(f"{trouble.signature}\n{trouble.story}\n")
        return
    tally: Counter[str] = Counter()
    seen: Counter[str] = Counter()
    number = 0
    start_s = time.process_time()
    slowest_s, slowest = 0.0, 0
    while time.process_time() - start_s < options.seconds:
        case_s = time.process_time()
        case, choose = case_of(options.kind, options.seed, number)
        for trouble in run_case(case, choose, tally, commands=options.commands):
            seen[trouble.signature] += 1
            if seen[trouble.signature] == 1:
                print(
                    f"[{options.kind} {options.seed}/{number}] {trouble.signature}\n{trouble.story[:1500]}\n",
                    flush=True,
                )
                if options.keep is not None:
                    _keep(options, number, case, trouble)
        slowest_s, slowest = max((slowest_s, slowest), (time.process_time() - case_s, number))
        number += 1
    took_s = time.process_time() - start_s
    numbers = {
        "kind": options.kind,
        "seed": options.seed,
        "cpu_s": round(took_s),
        "slowest": [round(slowest_s, 1), slowest],
        **tally,
        "sorts": dict(seen),
    }
    print(json.dumps(numbers))
    if options.keep is not None:
        with (options.keep / "numbers.jsonl").open("a") as file:
            file.write(json.dumps(numbers) + "\n")


def _keep(options: argparse.Namespace, number: int, case: Case, trouble: Trouble) -> None:
    """Write the smallest files that show a trouble."""
    end_s = time.process_time() + _MOST_MINIMISING_S

    def still(smaller: Case) -> bool:
        if time.process_time() > end_s:
            return False
        choose = random.Random(f"{options.seed}/{number}/again")
        every = 9 if trouble.where not in ("load", "settings", "review") and "/" not in trouble.where else 0
        troubles = run_case(smaller, choose, Counter(), commands=every)
        return any((each.sort, each.where) == (trouble.sort, trouble.where) for each in troubles)

    smallest = minimised(case, still) if still(case) else case
    folder = options.keep / f"{options.kind}-{options.seed}-{number}-{trouble.sort.replace(' ', '_')}"
    folder.mkdir(parents=True, exist_ok=True)
    for name, content in smallest.files.items():
        (folder / name).write_bytes(content)
    (folder / "trouble.txt").write_text(f"{trouble.signature}\n{trouble.story}\n", "utf-8", errors="backslashreplace")


if __name__ == "__main__":
    sys.exit(main())
