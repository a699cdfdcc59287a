"""The work in hand: records as they are being written, sound or not yet, kept on disk with every earlier version."""

from __future__ import annotations

from harvest.workspace.draft import Draft, Grid
from harvest.workspace.store import Entry, Workspace, default_folder

__all__ = ["Draft", "Entry", "Grid", "Workspace", "default_folder"]
