"""How long a traced view takes, against a numpy twin in the same run; and counting and chance.

Run it as a program: ``python tests/bench/bench_light.py``. Times are the best and the median of some runs: "wall" on
all cores, "work" the processor time of one core for the whole view. The ratio says how many times as long the twin
in numpy would take for as many pixels on one core. Nothing here is a limit: a shared machine is now quick, now slow.
"""

from __future__ import annotations

import importlib.util
import statistics
import sys
import time
from collections.abc import Callable
from pathlib import Path

import mirrorlab as ml
from mirrorlab import optics
from mirrorlab.optics.tracer import available_cores

SIZE = (1280, 720)
TWIN_SIZE = (64, 36)
RUNS = 15

VIEWS: dict[str, Callable[[], optics.Assembly]] = {
    "wedge 60": lambda: optics.wedge("60", 200, 60),
    "wedge 60, looked into": lambda: optics.wedge("60", 120, 100, look="into"),
    "corner 90 60 45, a ball": lambda: optics.corner(["90", "60", "45"], 150),
    "corner 90 60 36, cut": lambda: optics.corner(["90", "60", "36"], 200, truncated=60),
    "tube 60 60 60": lambda: optics.tube(["60"] * 3, 200, 50),
    "tube of four": lambda: optics.tube(["90"] * 4, 200, [50, 40]),
    "tube 60 60 60, tapered": lambda: optics.tube(["60"] * 3, 200, 60, taper=0.35),
}

OTHERS: dict[str, Callable[[], object]] = {
    "images, corner 90 60 36": lambda: optics.count_images(optics.corner(["90", "60", "36"], 150)),
    "images, tube 60 60 60 to 2 %": lambda: optics.count_images(optics.tube(["60"] * 3, 200, 50)),
    "chance, corner 90 60 36, 10000": lambda: optics.seam_chances(
        optics.intent_of(ml.Arrangement.from_angles(["90", "60", "36"]))[0], 0.05
    ),
}


def times(work: Callable[[], object], clock: Callable[[], float], runs: int) -> tuple[float, float]:
    """Best and median in milliseconds."""
    found = []
    for _ in range(runs):
        start = clock()
        work()
        found.append(1000 * (clock() - start))
    return min(found), statistics.median(found)


def twin() -> Callable[..., object]:
    """The slow tracer of the tests."""
    path = Path(__file__).parents[1] / "optics" / "slow_trace.py"
    spec = importlib.util.spec_from_file_location("slow_trace", path)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module.slow_trace


def main() -> int:
    slow = twin()
    start = time.perf_counter()
    optics.warm_up()
    print(f"numba loaded and kernels ready after {time.perf_counter() - start:.1f} s")
    print(f"\nviews of {SIZE[0]} by {SIZE[1]} pixels, {available_cores()} cores, one ray a pixel")
    print(f"  {'':28}{'wall best':>10}{'median':>8}{'work best':>10}{'twin ×':>8}")
    for name, make in VIEWS.items():
        assembly = make()
        scene = optics.make_scene(assembly)
        optics.trace(assembly, scene, SIZE)
        wall = times(lambda a=assembly, s=scene: optics.trace(a, s, SIZE), time.perf_counter, RUNS)
        work = times(lambda a=assembly, s=scene: optics.trace(a, s, SIZE, cores=1), time.process_time, RUNS)
        slowly = times(lambda a=assembly, s=scene: slow(a, s, TWIN_SIZE), time.process_time, 2)[0]
        ratio = slowly / work[0] * (SIZE[0] * SIZE[1]) / (TWIN_SIZE[0] * TWIN_SIZE[1])
        print(f"  {name:28}{wall[0]:8.0f}ms{wall[1]:6.0f}ms{work[0]:8.0f}ms{ratio:8.0f}")
    print()
    for name, job in OTHERS.items():
        job()
        best, median = times(job, time.process_time, 5)
        print(f"  {name:36} best {best:6.0f} ms, median {median:6.0f} ms")
    return 0


if __name__ == "__main__":
    sys.exit(main())
