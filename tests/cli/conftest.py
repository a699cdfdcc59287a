from __future__ import annotations

import os
import subprocess
import sys

import pytest

from harvest.record import demo_folder


def harvest(*arguments, **environment):
    """Run the command as a process of its own."""
    return subprocess.run(
        [sys.executable, "-m", "harvest", *map(str, arguments)],
        env={**os.environ, **environment},
        capture_output=True,
        encoding="utf-8",
        errors="replace",
        timeout=120,
        check=False,
    )


@pytest.fixture(scope="session")
def deer():
    return demo_folder("deer")
