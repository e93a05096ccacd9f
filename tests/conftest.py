"""Tests run from the root of the repository, and draw the same examples every time.

``HYPOTHESIS_PROFILE=search`` draws new ones instead.
"""

import os
from pathlib import Path

import pytest
from hypothesis import settings

settings.register_profile("same", deadline=None, derandomize=True)
settings.register_profile("search", deadline=None)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "same"))

ROOT = Path(__file__).parent.parent


@pytest.fixture(autouse=True)
def from_the_root(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)
