"""How long a finding takes, from typed angles to its sentence.

Run it as a program: ``python tests/bench/bench_mirrors.py``. It prints the best and the median of many runs, in
milliseconds of processor time, and ends with status 1 where a best is above its limit. The limit for three mirrors
leaves most of a frame (16 ms) to the picture and the table.
"""

from __future__ import annotations

import statistics
import sys
import time
from collections.abc import Callable

from mirrorlab.mirrors import Arrangement

RUNS = 60

# What is measured, the limit of its best run in milliseconds, and what is run.
TYPED = {
    "three mirrors, closed (90 60 45)": (3.0, ("90", "60", "45")),
    "three mirrors, closed (90 60 36)": (3.0, ("90", "60", "36")),
    "three mirrors, subdivided (90 60 72)": (3.0, ("90", "60", "72")),
    "three mirrors, open (72 72 90)": (3.0, ("72", "72", "90")),
    "three mirrors, open (90 60 31)": (3.0, ("90", "60", "31")),
    "three mirrors, tube (60 60 60)": (3.0, ("60", "60", "60")),
    "three mirrors, measured (59.9(2) 61.3 89)": (3.0, ("59.9(2)", "61.3", "89")),
    "two mirrors (60)": (3.0, ("60",)),
    "two mirrors (1)": (3.0, ("1",)),
}
FAMILIES = {"F4": 8.0, "H4": 8.0, "E6": 12.0, "E8": 40.0, "B8": 30.0}


def find(angles: tuple[str, ...]) -> str:
    """A fresh finding; parsing is cached as it is while a person types, nothing else is."""
    return Arrangement.from_angles(angles).finding().sentence


def suggest(angles: tuple[str, ...]) -> int:
    return len(Arrangement.from_angles(angles).finding().suggestions)


def orbit(name: str) -> int:
    return len(Arrangement.from_family(name).orbit(place="centre"))


def measure(work: Callable[[], object], runs: int = RUNS) -> tuple[float, float]:
    """Best and median of some runs, in milliseconds."""
    work()
    times = []
    for _ in range(runs):
        start = time.process_time()
        work()
        times.append(1000 * (time.process_time() - start))
    return min(times), statistics.median(times)


def main() -> int:
    jobs: list[tuple[str, float, Callable[[], object], int]] = []
    for name, (limit, angles) in TYPED.items():
        jobs.append((name, limit, lambda angles=angles: find(angles), RUNS))
    for family, limit in FAMILIES.items():
        jobs.append(
            (family, limit, lambda family=family: Arrangement.from_family(family).finding().sentence, 20)
        )
    jobs.append(("suggestions for three mirrors (61 60 90)", 40.0, lambda: suggest(("61", "60", "90")), 20))
    jobs.append(
        ("suggestions for four mirrors", 100.0, lambda: suggest(("61", "90", "90", "59", "90", "62")), 10)
    )
    jobs.append(("orbit of H3, 120 images", 6.0, lambda: orbit("H3"), 30))
    jobs.append(("orbit of E6, 51,840 images", 400.0, lambda: orbit("E6"), 5))
    late = False
    print(f"{'':44} {'best':>9} {'median':>9} {'limit':>9}  ms")
    for name, limit, work, runs in jobs:
        best, median = measure(work, runs)
        over = best > limit
        late |= over
        print(f"{name:44} {best:9.2f} {median:9.2f} {limit:9.1f}  {'above its limit' if over else ''}")
    return int(late)


if __name__ == "__main__":
    sys.exit(main())
