"""Fixtures: an empty served folder, and a service on it that answers in threads of this process."""

from __future__ import annotations

import os
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path
from typing import Any

import pytest

from sheetqc.folder import ServeResult, serve
from sheetqc.folder.layout import Layout
from tests.folder.standin import answer


@pytest.fixture
def layout(tmp_path: Path) -> Layout:
    made = Layout((tmp_path / "served").resolve())
    made.create()
    return made


@pytest.fixture
def said() -> list[str]:
    return []


@pytest.fixture
def serve_once(layout: Layout, said: list[str]) -> Callable[..., ServeResult]:
    def run(answerer: Any = answer, **options: Any) -> ServeResult:
        settings = {"settle": 0.02, "say": said.append, "executor": lambda: ThreadPoolExecutor(1), **options}
        return serve(layout.root, answerer, once=True, **settings)

    return run


@pytest.fixture
def files(layout: Layout) -> Callable[[], dict[str, list[str]]]:
    """The files in each place, as paths relative to it."""

    def found() -> dict[str, list[str]]:
        return {place: _files(layout.root / place) for place in PLACES}

    return found


PLACES = ("in", "working", "answered", "originals", "returned")


def _files(place: Path) -> list[str]:
    walked = os.walk(place)  # unlike a glob not disturbed by a folder that vanishes
    return sorted((Path(folder) / name).relative_to(place).as_posix() for folder, _, names in walked for name in names)
