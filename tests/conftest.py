"""Property tests run the same examples every time, and a busy machine fails none of them."""

from __future__ import annotations

import sys
from pathlib import Path

from hypothesis import HealthCheck, settings

sys.path += [str(Path(__file__).parent / room) for room in ("", "sections", "consumers")]  # builders that tests share

settings.register_profile(
    "steady", deadline=None, derandomize=True, suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large]
)
settings.load_profile("steady")
