from __future__ import annotations

import pytest

from tests.inputs.written import Desk, DriveDesk


@pytest.fixture
def desk(tmp_path, monkeypatch):
    """A folder with jobs in it, as the working directory."""
    monkeypatch.chdir(tmp_path)
    return Desk(tmp_path)


@pytest.fixture
def drives(tmp_path, monkeypatch):
    """The same for whole drives."""
    monkeypatch.chdir(tmp_path)
    return DriveDesk(tmp_path)
