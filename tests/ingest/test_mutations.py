"""Files of the corpus, damaged a thousand times: always one clear line or a reading, hardly ever a silent loss."""

from __future__ import annotations

import os
import random
import re
import time
import zlib
from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path

import pytest

from ingest.errors import InputError
from ingest.guard import kind_of, read_guarded
from ingest.parts import FileParts

LARGEST = 1_000_000
"""Files above this size are left out, to keep the run within the hour."""
EACH = 13


def cut(data: bytes, rng: random.Random) -> bytes:
    return data[: rng.randrange(1, len(data))]


def flip_few(data: bytes, rng: random.Random) -> bytes:
    return flipped(data, rng, 5)


def flip_many(data: bytes, rng: random.Random) -> bytes:
    return flipped(data, rng, 500)


def flipped(data: bytes, rng: random.Random, count: int) -> bytes:
    out = bytearray(data)
    for _ in range(count):
        out[rng.randrange(len(out))] ^= 1 << rng.randrange(8)
    return bytes(out)


def drop_slice(data: bytes, rng: random.Random) -> bytes:
    at = rng.randrange(len(data))
    return data[:at] + data[at + rng.randrange(1, 2000) :]


def double_slice(data: bytes, rng: random.Random) -> bytes:
    at = rng.randrange(len(data))
    return data[:at] + data[at : at + rng.randrange(1, 2000)] + data[at:]


def zero_slice(data: bytes, rng: random.Random) -> bytes:
    at, size = rng.randrange(len(data)), rng.randrange(1, 500)
    return data[:at] + bytes(len(data[at : at + size])) + data[at + size :]


def wrong_numbers(data: bytes, rng: random.Random) -> bytes:
    by = rng.choice([b"nan", b"1e999", b"-", b"9" * 40, b"1.0.0", b"1E 20"])
    return re.sub(rb"-?\d+\.\d+", lambda found: by if rng.random() < 0.05 else found[0], data)


def rewired(data: bytes, rng: random.Random) -> bytes:
    ids = re.findall(rb"#\d+", data) or [b"#1"]
    return re.sub(rb"#\d+(?![\d ]*=)", lambda found: rng.choice(ids) if rng.random() < 0.02 else found[0], data)


def swapped_lines(data: bytes, rng: random.Random) -> bytes:
    lines = data.split(b"\n")
    for _ in range(10):
        a, b = rng.randrange(len(lines)), rng.randrange(len(lines))
        lines[a], lines[b] = lines[b], lines[a]
    return b"\n".join(lines)


MUTATIONS: tuple[Callable[[bytes, random.Random], bytes], ...] = (
    cut, cut, cut, flip_few, flip_few, flip_many, drop_slice, drop_slice, double_slice, zero_slice, wrong_numbers,
    rewired, swapped_lines,
)  # fmt: skip


def corpus(kind: str) -> list[Path]:
    folder = os.environ.get("CUTWORTHY_CORPUS")
    found = sorted((Path(folder) / kind).glob(f"*.{kind}")) if folder else []
    return [path for path in found if 0 < path.stat().st_size < LARGEST]


def read_or_error(path: Path) -> FileParts | InputError:
    try:
        return read_guarded(path, kind_of(path), read_limit=30.0)
    except InputError as error:
        return error


def known(parts: FileParts) -> set[str]:
    return {*parts.losses, *(finding.code for finding in parts.findings)}


@dataclass
class Tally:
    """What became of the damaged copies."""

    count: int = 0
    told: int = 0
    faults: list[str] = field(default_factory=list)
    silent: list[str] = field(default_factory=list)

    def take(self, case: str, outcome: FileParts | InputError, whole: FileParts | InputError, seconds: float) -> None:
        self.count += 1
        if seconds > 30:
            self.faults.append(f"{case}: took {seconds:.0f} s")
        if isinstance(outcome, InputError):
            self.told += 1
            lines = str(outcome).split("\n")
            if len(lines) > 3 or not outcome.remedy or "made its reader stop" in outcome.problem:
                self.faults.append(f"{case}: {outcome}")
        elif isinstance(whole, FileParts) and outcome.entities < whole.entities:
            if known(outcome) - known(whole):
                self.told += 1
            else:
                self.silent.append(f"{case}: {whole.entities - outcome.entities} of {whole.entities} lost")


@pytest.mark.slow
@pytest.mark.corpus
@pytest.mark.timeout(3000)
@pytest.mark.parametrize("kind", ["ags", "dxf", "ifc"])
def test_damaged_files_are_refused_clearly_or_read_with_their_losses_told(kind: str, tmp_path: Path) -> None:
    tally = Tally()
    for path in corpus(kind):
        whole = read_or_error(path)
        for number in range(EACH):
            rng = random.Random(zlib.crc32(f"{path.name}-{number}".encode()))
            mutate = MUTATIONS[number % len(MUTATIONS)]
            victim = tmp_path / f"victim.{kind}"
            victim.write_bytes(mutate(path.read_bytes(), rng))
            start = time.monotonic()
            outcome = read_or_error(victim)
            tally.take(f"{path.name}, {mutate.__name__} {number}", outcome, whole, time.monotonic() - start)
    assert tally.count >= EACH * 15
    assert not tally.faults, "\n".join(tally.faults)
    assert len(tally.silent) <= 0.05 * (len(tally.silent) + tally.told), "\n".join(tally.silent)
