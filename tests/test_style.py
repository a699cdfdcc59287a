"""Lint, format and types: the tools that really run."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent


@pytest.mark.parametrize(
    "command",
    [
        ("ruff", "check", "."),
        ("ruff", "format", "--check", "."),
        ("mypy", "--no-error-summary"),
        ("mypy", "--no-error-summary", *sorted(str(p) for p in (ROOT / "pages").glob("*.py"))),
    ],
    ids=lambda command: " ".join(command[:2]) + (" pages" if len(command) > 3 else ""),
)
def test_style(command):
    done = subprocess.run([sys.executable, "-m", *command], cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout + done.stderr
