"""Times of the screening of a 300 m pit with four levels and 400 supports, against its bare sparse factorisation.

Run by hand: `python tests/benchmarks/bench_screening.py`. Prints ratios; seconds depend on the machine.
"""

from __future__ import annotations

import dataclasses
import sys
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parents[1] / "oracle")]
from scenes import Scene, anchors, box  # noqa: E402
from screened import base_variant, found_of, site_of  # noqa: E402

from sections.criteria.screening import variants_of  # noqa: E402
from sections.screening import run as running  # noqa: E402
from sections.screening import scene as scenes  # noqa: E402
from sections.screening import solve as solving  # noqa: E402

LEVELS = (2.0, 4.0, 6.0, 8.0)
STRENGTH = {"phi": 30.0, "c": 2.0}


def pit(length: float, width: float, *, strong: bool = False) -> tuple[scenes.Scene, Scene]:
    """A pit with anchors at 3 m on four levels."""
    plan = box(length, width)
    plain = Scene(name="bench", title="", corners=plan, dig=((0.0, 10.0),), toe=16.0, wall="monolithic",
                  props=anchors(plan, 3.0, LEVELS, 2e4))  # fmt: skip
    site = site_of(plain)
    if strong:
        site = dataclasses.replace(site, strata=tuple(dataclasses.replace(s, **STRENGTH) for s in site.strata))
    made, why = scenes.make_scene(site, found_of(plain, site))
    assert made is not None, why
    return made, plain


def best(action: Callable[[], object], times: int = 3) -> float:
    """Least of a few times of this thread alone, s: other work on the machine counts less."""
    took = []
    for _ in range(times):
        start = time.thread_time()
        action()
        took.append(time.thread_time() - start)
    return min(took)


def bare(made: scenes.Scene, plain: Scene) -> float:
    """The sparse factorisation of the final stage and nothing else, s."""
    variant = base_variant(plain)
    wall, _ = scenes.wall_of(made, variant, made.stages[-1][0])
    members, _ = scenes.members_of(made, variant)
    model = solving.factorise(wall, members, scenes.beams_of(made, variant, made.stages[-1][1]), made.pattern)
    matrix = solving.ordered(model.matrix, model.live, model.scale)
    return best(lambda: solving.factors_of(matrix))


def say(line: str) -> None:
    """Write a line."""
    sys.stdout.write(line + "\n")


def main() -> None:
    """Print the table."""
    for strong in (False, True):
        made, plain = pit(110.0, 40.0, strong=strong)
        last, variant = dataclasses.replace(made, stages=made.stages[-1:]), base_variant(plain)
        base = bare(made, plain)
        one = best(lambda scene=last, variant=variant: running.run_variant(scene, variant))
        staged = best(lambda scene=made, variant=variant: running.run_variant(scene, variant), 1)
        runs = variants_of(made)
        start = time.perf_counter()
        for each in runs:
            running.run_variant(made, each)
        band = time.perf_counter() - start
        say(
            f"limits {'on' if strong else 'off'}: {made.found.shape.length:.0f} m, {len(made.site.supports)} supports, "
            f"factorisation {base:.2f} s; one stage {one / base:.2f} x that; "
            f"{len(made.stages)} stages {staged / one:.1f} x one stage; band of {len(runs)} variants {band / one:.1f} x one stage"
        )
    sizes, took = (100.0, 200.0, 400.0), []
    for perimeter in sizes:
        made, plain = pit(perimeter / 2 - 20.0, 20.0)
        made = dataclasses.replace(made, stages=made.stages[-1:])
        took.append(best(lambda scene=made, plain=plain: running.run_variant(scene, base_variant(plain))))
    growth = np.polyfit(np.log(sizes), np.log(took), 1)[0]
    say(f"growth exponent over perimeters {sizes}: {growth:.2f}")


if __name__ == "__main__":
    main()
