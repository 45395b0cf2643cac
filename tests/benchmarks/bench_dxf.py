"""Time and memory of reading a drawing of 200,000 entities, against the bare `ezdxf.readfile` of the same file.

Run by hand: `python tests/benchmarks/bench_dxf.py [ENTITIES ...]`. Prints ratios; seconds depend on the machine.
"""

from __future__ import annotations

import math
import random
import subprocess
import sys
import tempfile
from pathlib import Path
from typing import Any

ROOT = Path(__file__).parents[2]
CHILD = """
import re, sys, time
sys.path.insert(0, {root!r})
from pathlib import Path
import ezdxf
from ingest.dxf.reader import read_dxf
path = Path(sys.argv[2])
memory = lambda: int(re.search(r"VmHWM:\\s+(\\d+)", Path("/proc/self/status").read_text())[1]) / 1024
before, start = memory(), time.process_time()
held = read_dxf(path) if sys.argv[1] == "read" else ezdxf.readfile(path)
print(time.process_time() - start, memory() - before)
"""


def draw(space: Any, block: str, number: int, rng: random.Random) -> None:
    """One entity: 40 % lines, 30 % polylines with arcs, 10 % each circles, inserts with an attribute, texts."""
    x, y, kind = rng.uniform(0, 400), rng.uniform(0, 400), number % 10
    if kind < 4:
        space.add_line((x, y), (x + rng.uniform(1, 5), y + 1), dxfattribs={"layer": "A-WALL"})
    elif kind < 7:
        corners = [(x, y, 0.3), (x + 1, y, 0), (x + 1, y + 1, -0.2), (x, y + 1, 0)]
        space.add_lwpolyline(corners, format="xyb", close=bool(kind % 2), dxfattribs={"layer": "S"})
    elif kind == 7:
        space.add_circle((x, y), rng.uniform(0.2, 0.6), dxfattribs={"layer": "PILES"})
    elif kind == 8:
        turned = {"layer": "PILES", "rotation": rng.uniform(0, 360)}
        space.add_blockref(block, (x, y), dxfattribs=turned).add_attrib("NO", f"P{number}", (x, y))
    else:
        space.add_text(f"+{x:.2f}", height=0.3, dxfattribs={"layer": "LEVELS"}).set_placement((x, y))


def make(path: Path, count: int) -> None:
    """Write a drawing of so many entities."""
    import ezdxf

    document, rng = ezdxf.new("R2010", units=6), random.Random(1)
    pile = document.blocks.new("PILE")
    pile.add_circle((0, 0), 0.375)
    pile.add_line((-0.4, 0), (0.4, 0))
    for number in range(count):
        draw(document.modelspace(), "PILE", number, rng)
    document.saveas(path)


def measure(what: str, path: Path) -> tuple[float, float]:
    """Least CPU seconds of two runs and the memory above the idle interpreter, MB, each in a process of its own."""
    command = [sys.executable, "-c", CHILD.format(root=str(ROOT)), what, str(path)]
    runs = [subprocess.run(command, capture_output=True, text=True, check=True).stdout.split() for _ in range(2)]
    return min(float(run[0]) for run in runs), min(float(run[1]) for run in runs)


def say(line: str) -> None:
    """Write a line."""
    sys.stdout.write(line + "\n")


def main() -> None:
    """Print the table."""
    counts = [int(word) for word in sys.argv[1:]] or [20_000, 200_000]
    times = []
    with tempfile.TemporaryDirectory() as folder:
        for count in counts:
            path = Path(folder) / f"{count}.dxf"
            make(path, count)
            (bare, bare_memory), (ours, our_memory) = measure("bare", path), measure("read", path)
            times.append(ours)
            say(
                f"{count} entities, {path.stat().st_size / 1e6:.0f} MB: readfile {bare:.2f} s, {bare_memory:.0f} MB; "
                f"reader {ours / bare:.2f} x its time, {our_memory / bare_memory:.2f} x its memory"
            )
    if len(times) > 1:
        growth = math.log(times[-1] / times[0]) / math.log(counts[-1] / counts[0])
        say(f"time grows with the number of entities to the power {growth:.2f}")


if __name__ == "__main__":
    main()
