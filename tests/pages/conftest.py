"""Every test of a page has a workspace of its own; results are kept across tests, by the record's digest."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from streamlit.components.v2.component_manager import BidiComponentManager

from harvest.workspace import Workspace, default_folder


@pytest.fixture(autouse=True)
def space(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Workspace:
    monkeypatch.setenv("HARVEST_WORKSPACE", str(tmp_path / "records"))
    return Workspace(default_folder())


@pytest.fixture(autouse=True)
def no_search_for_components(monkeypatch: pytest.MonkeyPatch) -> None:
    """Each new window reads what every installed package says of itself, for components that the app does not use."""

    def find_none(self: BidiComponentManager, **options: Any) -> None:
        return

    monkeypatch.setattr(BidiComponentManager, "discover_and_register_components", find_none)
