"""The one rule of the house: rooms do not touch each other, numbers touch no files, only the corridor joins them."""

from __future__ import annotations

import ast
import importlib
import pkgutil
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

import sheetqc

PACKAGE = Path(sheetqc.__file__).parent
MODULES = sorted(PACKAGE.rglob("*.py"))

ROOMS = ("intake", "judgement", "sheets", "package", "folder", "register")
RECORDS = ("finding", "study", "assessment", "outcome", "errors", "kinds", "vocabulary")
CORRIDOR = ("pipeline", "cli", "service", "verification", "batch", "__init__", "__main__")
"""Modules that may know more than one room."""

KNOW_NOTHING_OF_QUALITY = ("package", "folder")
ENVELOPE = ("sheetqc.__version__", "sheetqc.assessment.SCHEMA")
"""What every JSON file says of itself; any room may state it."""

QUALITY = ("study", "assessment", "kinds", "vocabulary", "stats")
FILES = ("pathlib", "io", "os", "shutil", "tempfile", "zipfile", "openpyxl", "xlsxwriter", "python_calamine", "lxml")
"""What the rooms of numbers have no use for."""

LONGEST = 400
"""Lines of a module above which it should have become a folder."""


def module_name(path: Path) -> str:
    parts = path.relative_to(PACKAGE.parent).with_suffix("").parts
    return ".".join(parts[:-1] if parts[-1] == "__init__" else parts)


def room_of(path: Path) -> str:
    """The room a module stands in, its own name when it stands in none."""
    return path.relative_to(PACKAGE).with_suffix("").parts[0]


def imports_in(tree: ast.AST, package: str) -> Iterator[str]:
    """Full names of everything imported, also late in functions and relative ones."""
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names if alias.name != "sheetqc")
        elif isinstance(node, ast.Attribute) and isinstance(node.value, ast.Name) and node.value.id == "sheetqc":
            yield f"sheetqc.{node.attr}"  # "import sheetqc" alone says nothing of what is used
        elif isinstance(node, ast.ImportFrom):
            base = node.module or ""
            if node.level:
                above = package.split(".")[: len(package.split(".")) - node.level + 1]
                base = ".".join([*above, base] if base else above)
            yield from (f"{base}.{alias.name}" for alias in node.names)


def imports_of(path: Path) -> list[str]:
    package = module_name(path) if path.name == "__init__.py" else module_name(path).rpartition(".")[0]
    return list(imports_in(ast.parse(path.read_text(encoding="utf-8")), package))


def foreign_rooms(path: Path) -> list[str]:
    """What a module imports of the project that its place does not allow."""
    allowed = allowed_in(room_of(path))
    own = [name for name in imports_of(path) if name.startswith("sheetqc.") and name not in ENVELOPE]
    return [name for name in own if allowed is not None and name.split(".")[1] not in allowed]


def allowed_in(room: str) -> set[str] | None:
    """What of the project a room may import; None for the corridor, which may import all."""
    if room in CORRIDOR:
        return None
    if room == "stats":
        return {"stats"}
    if room in KNOW_NOTHING_OF_QUALITY:
        return {room, *RECORDS} - set(QUALITY)
    if room in ROOMS:
        return {room, "stats", *RECORDS}
    return {*RECORDS, "answer_json"}


@pytest.mark.parametrize("path", MODULES, ids=lambda p: p.relative_to(PACKAGE).as_posix())
def test_every_module_imports_only_what_its_place_allows(path: Path) -> None:
    assert foreign_rooms(path) == []


def test_every_module_has_a_place_that_the_rule_knows() -> None:
    assert {room_of(path) for path in MODULES} <= {*ROOMS, *RECORDS, *CORRIDOR, "stats", "answer_json"}
    assert set(ROOMS) <= {room_of(path) for path in MODULES}


NUMBERS = [path for path in MODULES if room_of(path) in ("stats", "judgement")]


def openings(tree: ast.AST) -> list[str]:
    """Calls by which a module would open a file itself."""
    calls = [node.func for node in ast.walk(tree) if isinstance(node, ast.Call)]
    names = [f.id for f in calls if isinstance(f, ast.Name)] + [f.attr for f in calls if isinstance(f, ast.Attribute)]
    forbidden = {"open", "write_text", "write_bytes", "save", "savetxt", "loadtxt", "fromfile", "genfromtxt"}
    return [name for name in names if name in forbidden]


@pytest.mark.parametrize("path", NUMBERS, ids=lambda p: p.relative_to(PACKAGE).as_posix())
def test_no_room_of_numbers_touches_a_file(path: Path) -> None:
    assert [name for name in imports_of(path) if name.split(".")[0] in FILES] == []
    assert openings(ast.parse(path.read_text(encoding="utf-8"))) == []


@pytest.mark.parametrize("path", MODULES, ids=lambda p: p.relative_to(PACKAGE).as_posix())
def test_nothing_that_takes_more_than_a_second_to_import(path: Path) -> None:
    assert [name for name in imports_of(path) if name.startswith("scipy.stats")] == []


@pytest.mark.parametrize("path", MODULES, ids=lambda p: p.relative_to(PACKAGE).as_posix())
def test_no_module_is_too_long(path: Path) -> None:
    assert len(path.read_text(encoding="utf-8").splitlines()) <= LONGEST


def every_module() -> list[str]:
    return sorted(m.name for m in pkgutil.walk_packages([str(PACKAGE)], "sheetqc.") if not m.name.endswith("__main__"))


@pytest.mark.parametrize("name", ["sheetqc", *every_module()])
def test_every_public_name_is_there(name: str) -> None:
    module = importlib.import_module(name)
    missing = [public for public in getattr(module, "__all__", ()) if not hasattr(module, public)]
    assert missing == []


CONTRACT = (
    "anderson_darling",
    "shapiro_wilk",
    "ppcc",
    "fit",
    "families",
    "box_cox",
    "capability",
    "proportion_interval",
    "control_chart_constants",
    "runs_test",
)
"""Functions that other people's programs call by these names."""


@pytest.mark.parametrize("name", CONTRACT)
def test_the_statistics_can_be_used_alone(name: str) -> None:
    assert callable(getattr(importlib.import_module("sheetqc.stats"), name))


def test_help_needs_none_of_the_heavy_libraries() -> None:
    program = (
        "import sys, sheetqc.cli\n"
        "try: sheetqc.cli.main(['answer', '--help'])\n"
        "except SystemExit as end: assert end.code == 0\n"
        "print(*sorted({'numpy', 'scipy', 'pandas', 'openpyxl', 'xlsxwriter', 'lxml'} & set(sys.modules)), sep=',')\n"
    )
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert done.stdout.splitlines()[-1] == ""


@pytest.mark.parametrize(
    ("place", "source", "found"),
    [
        ("intake/x.py", "from sheetqc import judgement", ["sheetqc.judgement"]),
        ("sheets/x.py", "def f():\n    from sheetqc.package import graft", ["sheetqc.package.graft"]),
        ("stats/x.py", "from sheetqc.study import Study", ["sheetqc.study.Study"]),
        ("stats/x.py", "from . import goodness\nfrom ..finding import Cell", ["sheetqc.finding.Cell"]),
        ("folder/x.py", "import sheetqc.assessment", ["sheetqc.assessment"]),
        ("study.py", "from sheetqc.intake import read", ["sheetqc.intake.read"]),
        ("register/x.py", "import sheetqc\nsheetqc.pipeline.answer(sheetqc.__version__)", ["sheetqc.pipeline"]),
        ("judgement/x.py", "import numpy\nfrom sheetqc.stats import fit\nfrom sheetqc.finding import Cell", []),
    ],
)
def test_the_rule_finds_what_breaks_it(
    place: str, source: str, found: list[str], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("tests.test_import_rule.PACKAGE", tmp_path / "sheetqc")
    path = tmp_path / "sheetqc" / place
    path.parent.mkdir(parents=True)
    path.write_text(source, encoding="utf-8")
    assert foreign_rooms(path) == found


def test_an_opened_file_is_found() -> None:
    assert openings(ast.parse("with open('x') as f: pass\nPath('x').write_text('y')")) == ["open", "write_text"]
