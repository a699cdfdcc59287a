"""Property tests draw the same examples every time and are not judged by the clock of a busy machine."""

from __future__ import annotations

from hypothesis import settings

settings.register_profile("harvest", deadline=None, derandomize=True)
settings.load_profile("harvest")
