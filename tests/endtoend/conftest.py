"""Where the field records are, and what happens when they are absent."""

import os
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]


@pytest.fixture(scope="session")
def field_data() -> Path:
    folder = ROOT.parent / "shared" / "data"
    if not folder.is_dir():
        if os.environ.get("SURFDISP_REQUIRE_ALL") == "1":
            pytest.fail(f"the field records are required and absent: {folder}")
        pytest.skip("the field records are not beside the checkout")
    return folder
