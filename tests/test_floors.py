"""Imports only go down: kernels, domain, analyses, plan, faces. And imports stay light where they should."""

from __future__ import annotations

import ast
import subprocess
import sys
from pathlib import Path

import pytest

import harvest

ROOT = Path(harvest.__file__).parent
PAGES = ROOT.parent / "pages"
#: From low to high; a module may import its own floor and those below.
FLOORS = (
    ("errors", "writing", ""),
    ("kernels",),
    ("population", "record", "rates", "sheets", "workspace", "twospecies"),
    ("fit", "yields", "futures", "drivers"),
    ("plan", "charts"),
    ("cli", "commands", "__main__", "app", "desk", "pages"),
)
FLOOR_OF = {name: height for height, names in enumerate(FLOORS) for name in names}
FACES = FLOORS[-1]
FILES = sorted(ROOT.rglob("*.py")) + (sorted(PAGES.rglob("*.py")) if PAGES.exists() else [])


def part_of(file: Path) -> str:
    """The part of the program a file belongs to: the name below ``harvest``, "" for the package itself."""
    if file.is_relative_to(PAGES):
        return "pages"
    place = file.relative_to(ROOT)
    return place.parts[0] if len(place.parts) > 1 else place.stem.replace("__init__", "")


def imported(file: Path) -> set[str]:
    """Every module that a file imports anywhere in it, absolute names; type-checking blocks count too."""
    package = ("harvest", *file.relative_to(ROOT).parts[:-1]) if file.is_relative_to(ROOT) else ("pages",)
    return names_in(file.read_text("utf-8"), package)


def names_in(text: str, package: tuple[str, ...]) -> set[str]:
    names = set()
    for node in ast.walk(ast.parse(text)):
        if isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            base = ".".join(package[: len(package) - node.level + 1]) if node.level else ""
            module = ".".join(filter(None, (base, node.module)))
            names |= {module} | ({f"{module}.{alias.name}" for alias in node.names} if module == "harvest" else set())
    return names


def parts_imported(file: Path) -> set[str]:
    """Parts of the program that a file imports; ``from harvest import __version__`` is the package itself."""
    found = set()
    for name in imported(file):
        head, _, rest = name.partition(".")
        if head == "harvest" and rest:
            part = rest.split(".")[0]
            found.add(part if (ROOT / part).is_dir() or (ROOT / f"{part}.py").exists() else "")
    return found


@pytest.mark.parametrize("file", FILES, ids=lambda f: str(f.relative_to(ROOT.parent)))
def test_no_import_goes_up(file):
    mine = part_of(file)
    assert mine in FLOOR_OF, f"{mine} has no floor yet: give it one in FLOORS"
    for other in parts_imported(file):
        assert other in FLOOR_OF, f"{other} has no floor yet: give it one in FLOORS"
        assert FLOOR_OF[other] <= FLOOR_OF[mine], f"{mine} imports {other}, which is above it"


ALLOWED_ONLY = {
    "click": FACES,
    "streamlit": ("app", "desk", "pages"),
    "altair": ("charts",),
    "docx": ("plan",),
    "openpyxl": ("plan", "sheets"),
    "emcee": ("fit",),
    "numba": ("kernels",),
}


@pytest.mark.parametrize("library", ALLOWED_ONLY)
def test_a_library_stays_in_its_place(library):
    users = {part_of(file) for file in FILES if any(n.split(".")[0] == library for n in imported(file))}
    assert users <= set(ALLOWED_ONLY[library])


def test_kernels_know_arrays_only():
    allowed = {"numpy", "numba", "platformdirs", "harvest"}
    for file in (ROOT / "kernels").glob("*.py"):
        for name in imported(file):
            head = name.split(".")[0]
            assert head in allowed or head in sys.stdlib_module_names, (file.name, name)
        assert parts_imported(file) <= {"kernels"}


def modules_after(statement: str) -> set[str]:
    script = f"{statement}; import sys; print(' '.join(sys.modules))"
    done = subprocess.run([sys.executable, "-W", "error", "-c", script], capture_output=True, text=True, check=True)
    return {name.split(".")[0] for name in done.stdout.split()}


HEAVY = {"numpy", "pandas", "scipy", "numba", "click", "streamlit", "altair", "openpyxl", "docx", "emcee"}


@pytest.mark.parametrize("statement", ["import harvest", "import harvest.record", "import harvest; harvest.Record"])
def test_the_package_and_the_record_load_nothing_heavy(statement):
    assert not modules_after(statement) & HEAVY


def test_every_public_name_is_there():
    assert set(harvest.__all__) == {n for n in dir(harvest) if n in harvest.__all__}
    for name in harvest.__all__:
        assert getattr(harvest, name) is not None, name
    with pytest.raises(AttributeError, match="no_such_name"):
        harvest.no_such_name  # noqa: B018


@pytest.mark.parametrize(
    "text",
    [
        "import harvest.plan",
        "import harvest.plan.table as t",
        "from harvest import plan",
        "from harvest.plan.table import x",
        "def f():\n    from ..plan import y",
        "from .. import plan",
        "from typing import TYPE_CHECKING\nif TYPE_CHECKING:\n    from harvest.plan import z",
    ],
)
def test_the_check_sees_every_way_to_import(text):
    assert any(name.startswith("harvest.plan") for name in names_in(text, ("harvest", "kernels")))
