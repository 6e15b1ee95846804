"""Outside figures for the engineering formulas."""

from __future__ import annotations

import tomllib
from pathlib import Path
from typing import Any

import pytest
from hypothesis import settings

# A busy machine is no reason for a formula to fail.
settings.register_profile("patient", deadline=None)
settings.load_profile("patient")

FILE = Path(__file__).parents[1] / "reference" / "engineering.toml"


@pytest.fixture(scope="session")
def figures() -> dict[str, Any]:
    return tomllib.loads(FILE.read_text(encoding="utf-8"))
