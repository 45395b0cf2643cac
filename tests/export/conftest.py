"""Shared objects of the export tests: the builders beside this file, and one written folder per session."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent))

from builders_export import Job, first_pit_job, showcase_job


@pytest.fixture(scope="session")
def first_pit() -> Job:
    return first_pit_job()


@pytest.fixture(scope="session")
def showcase() -> Job:
    return showcase_job()
