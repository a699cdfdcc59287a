"""What is installed outside a checkout: the wheel carries the demos, and the command finds them."""

from __future__ import annotations

import os
import subprocess
import sys
import zipfile
from pathlib import Path

ROOT = Path(__file__).parent.parent
APP = """
import sys
from streamlit.testing.v1 import AppTest
page = AppTest.from_file(sys.argv[1], default_timeout=60).run()
assert not page.exception, page.exception
print([block.proto.body for block in page.get("html")])
"""


def test_the_wheel_works_outside_the_checkout(tmp_path):
    wheel = [sys.executable, "-m", "pip", "wheel", "--no-deps", "--no-build-isolation", "-q", "-w", str(tmp_path), "."]
    subprocess.run(wheel, cwd=ROOT, check=True, capture_output=True)
    place = tmp_path / "installed"
    with zipfile.ZipFile(next(tmp_path.glob("harvest-*.whl"))) as archive:
        names = archive.namelist()
        archive.extractall(place)
    assert {"harvest/data_demo/deer/record.toml", "harvest/pages/start.py", "harvest/desk/style.css"} <= set(names)
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
    app = subprocess.run(
        [sys.executable, "-c", APP, str(place / "harvest" / "app.py")],
        env={**os.environ, "PYTHONPATH": str(place), "HARVEST_WORKSPACE": str(tmp_path / "records")},
        cwd=tmp_path,
        capture_output=True,
        text=True,
        check=False,
    )
    assert app.returncode == 0, app.stderr
    assert "How much can be taken" in app.stdout
    assert (tmp_path / "mine" / "history.csv").read_bytes() == (
        ROOT / "data_demo" / "lake" / "history.csv"
    ).read_bytes()
