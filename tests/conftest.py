"""What tests of several rooms share."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.references.mice.prepare import prepare_mice


@pytest.fixture(scope="session")
def mice_study(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The study file of the mouse connectomes, in a folder that tests only read."""
    return prepare_mice(tmp_path_factory.mktemp("mice"))
