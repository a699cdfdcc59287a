"""The cache of compiled kernels: warm when nothing changed, never stale, never in the way."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

import harvest
from harvest.kernels.compiling import kernel_digest

SCRIPT = """
import numpy as np, sys
from harvest.kernels import equilibria, compiling
one = lambda v: np.array([float(v)])
out = np.empty(1)
equilibria.holding_yield(1, np.array([0]), one(0.2), one(1000), one(0), one(500), out)
hits = sum(equilibria.holding_yield.stats.cache_hits.values())
print(out[0], hits, compiling.cache_folder(), compiling.__file__)
"""


@pytest.fixture
def copy(tmp_path: Path) -> Path:
    """The package's own folder copied, so that it can be edited."""
    home = tmp_path / "copy"
    source = Path(harvest.__file__).parent
    (home / "harvest").mkdir(parents=True)
    shutil.copy(source / "__init__.py", home / "harvest")
    shutil.copytree(source / "kernels", home / "harvest" / "kernels", ignore=shutil.ignore_patterns("__pycache__"))
    return home


def run(home: Path, cache: Path) -> tuple[float, int, Path]:
    environment = os.environ | {"PYTHONPATH": str(home), "HARVEST_CACHE": str(cache), "PYTHONDONTWRITEBYTECODE": "1"}
    done = subprocess.run(
        [sys.executable, "-W", "error", "-c", SCRIPT],
        env=environment,
        cwd=home,
        capture_output=True,
        text=True,
        check=True,
    )
    value, hits, folder, file = done.stdout.split()
    assert file.startswith(str(home))
    return float(value), int(hits), Path(folder)


def edit(home: Path) -> None:
    """Double the logistic in growth.py; the compiled function that uses it is in equilibria.py."""
    file = home / "harvest" / "kernels" / "growth.py"
    text = file.read_text()
    assert text.count("return r * n * (1.0 - n / k)\n") == 1
    file.write_text(text.replace("return r * n * (1.0 - n / k)\n", "return 2.0 * r * n * (1.0 - n / k)\n"))


def test_warm_start_loads_and_an_edited_callee_is_not_served_stale(copy, tmp_path):
    cache = tmp_path / "cache"
    value, hits, folder = run(copy, cache)
    assert (value, hits) == (pytest.approx(50.0), 0)
    assert folder.parent == cache
    assert run(copy, cache)[:2] == (pytest.approx(50.0), 1), "a second start loads machine code"
    edit(copy)
    value, hits, other = run(copy, cache)
    assert (value, hits) == (pytest.approx(100.0), 0)
    assert other != folder


def test_without_the_digest_the_stale_code_would_be_served(copy, tmp_path):
    """The trap itself, so that the test above is known to be able to fail."""
    file = copy / "harvest" / "kernels" / "compiling.py"
    file.write_text(file.read_text().replace("return digest.hexdigest()[:16]", "return 'same'"))
    run(copy, tmp_path / "cache")
    edit(copy)
    assert run(copy, tmp_path / "cache")[:2] == (pytest.approx(50.0), 1)


def test_a_cache_folder_that_cannot_be_written_is_no_obstacle(copy, tmp_path):
    blocked = tmp_path / "a file"
    blocked.write_text("in the way")
    value, _, folder = run(copy, blocked / "cache")
    assert value == pytest.approx(50.0)
    assert not folder.is_relative_to(blocked)
    shutil.rmtree(folder, ignore_errors=True)


def test_digest_sees_every_file_and_name(copy):
    folder = copy / "harvest" / "kernels"
    seen = {kernel_digest(folder)}
    for file in sorted(folder.glob("*.py")):
        text = file.read_text()
        file.write_text(text + "\n# edited\n")
        seen.add(kernel_digest(folder))
        file.write_text(text)
    assert len(seen) == 1 + len(list(folder.glob("*.py")))
    assert kernel_digest(folder) in seen
