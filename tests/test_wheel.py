"""What is installed outside a checkout: the wheel carries the demos, and the command finds them."""

from __future__ import annotations

import os
import subprocess
import sys
import zipfile
from pathlib import Path

ROOT = Path(__file__).parent.parent


def test_the_wheel_works_outside_the_checkout(tmp_path):
    wheel = [sys.executable, "-m", "pip", "wheel", "--no-deps", "--no-build-isolation", "-q", "-w", str(tmp_path), "."]
    subprocess.run(wheel, cwd=ROOT, check=True, capture_output=True)
    place = tmp_path / "installed"
    with zipfile.ZipFile(next(tmp_path.glob("harvest-*.whl"))) as archive:
        names = archive.namelist()
        archive.extractall(place)
    assert "harvest/data_demo/deer/record.toml" in names
    assert not any(name.startswith("tests/") for name in names)
    done = subprocess.run(
        [sys.executable, "-m", "harvest", "new", str(tmp_path / "mine"), "--demo", "lake"],
        env={**os.environ, "PYTHONPATH": str(place)},
        cwd=tmp_path,
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.returncode == 0, done.stderr
    assert (tmp_path / "mine" / "history.csv").read_bytes() == (
        ROOT / "data_demo" / "lake" / "history.csv"
    ).read_bytes()
