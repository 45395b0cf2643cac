"""Times of finding a perimeter, its rows and stations, and the choice, against plain line work on the same lines.

Run by hand: `python tests/benchmarks/bench_finding.py`. Prints ratios measured in one run; seconds depend on the machine.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np
import shapely

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parents[1] / "sections")]
from pit_lines import rows  # noqa: E402
from test_find_speed import big_site  # noqa: E402

from ingest.model import Site  # noqa: E402
from sections.perimeter.perimeter import find_shapes  # noqa: E402
from sections.pit.find import describe_pits  # noqa: E402
from sections.verdicts.choice import choose  # noqa: E402
from sections.verdicts.judged import judge_stations  # noqa: E402


def seconds(work: Callable[[], object], times: int = 3) -> float:
    """Least processor time of a few runs, s."""
    best = float("inf")
    for _ in range(times):
        start = time.process_time()
        work()
        best = min(best, time.process_time() - start)
    return best


def piles(side: float) -> Site:
    """A square pit of piles at 0.2 m: 5,000 along a kilometre."""
    corners = [(0.0, 0.0), (side, 0.0), (side, side), (0.0, side)]
    return Site(piles=rows(corners, 0.2, diameter=0.18, kind="contiguous"))


def line_work(site: Site) -> None:
    """Node and polygonise the segments between neighbouring piles."""
    centres = np.array([pile.centre for pile in site.piles])
    lines = shapely.linestrings(np.stack([centres, np.roll(centres, -1, axis=0)], axis=1))
    shapely.polygonize(shapely.get_parts(shapely.node(shapely.multilinestrings(lines))))


def main() -> None:
    """Print the ratios."""
    large, small = piles(250.0), piles(62.5)
    bare, long, short = (
        seconds(lambda s=s, f=f: f(s)) for f, s in ((line_work, large), (find_shapes, large), (find_shapes, small))
    )
    print(
        f"perimeter of 5,000 piles: {long:.2f} s, {long / bare:.1f} times node + polygonize, growth exponent {np.log(long / short) / np.log(4):.2f}"
    )
    (site4, shape4), (site1, shape1) = big_site(4), big_site(1)
    four = seconds(lambda: describe_pits(site4, (shape4,)))
    one = seconds(lambda: describe_pits(site1, (shape1,)))
    print(
        f"rows, zones, stations of {shape4.length:.0f} m with 2,000 members: {four:.2f} s, growth exponent {np.log(four / one) / np.log(4):.2f}"
    )
    found = describe_pits(site1, (shape1,))[0]
    from sections.criteria import CRITERIA
    from sections.criteria.screening import screening

    thin = tuple(criterion for criterion in CRITERIA if criterion is not screening)
    judged = judge_stations(site1, found, criteria=thin)
    judging = seconds(lambda: judge_stations(site1, found, criteria=thin))
    choosing = seconds(lambda: choose(site1, [judged]))
    print(
        f"all criteria but the screening: {judging / one:.1f}, the choice: {choosing / one:.1f} times the finding of the same {shape1.length:.0f} m"
    )


if __name__ == "__main__":
    main()
