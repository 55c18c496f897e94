from __future__ import annotations

import pytest

from tests.inputs.written import Desk


@pytest.fixture
def desk(tmp_path, monkeypatch):
    """A folder with jobs in it, as the working directory."""
    monkeypatch.chdir(tmp_path)
    return Desk(tmp_path)
