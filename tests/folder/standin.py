"""A stand-in answerer: answers packages by a copy and a JSON, and does as the file's name says."""

from __future__ import annotations

import errno
import hashlib
import json
import os
import shutil
import time
import zipfile
from pathlib import Path

from sheetqc.errors import DamagedWorkbook, NotAWorkbook
from sheetqc.outcome import Outcome


def package(path: Path, content: str = "", size: int = 200) -> Path:
    """Make a small zip package with the given content, in one step as a program that saves would."""
    path.parent.mkdir(parents=True, exist_ok=True)
    temporary = path.with_name(f"~{path.name}.tmp")
    with zipfile.ZipFile(temporary, "w") as book:
        # ZipInfo without a time: the same content gives the same file whenever it is made
        book.writestr(zipfile.ZipInfo("content.txt"), content or path.name)
        book.writestr(zipfile.ZipInfo("filling.bin"), b"\x07" * size)
    temporary.replace(path)
    return path


def content_of(path: Path) -> str:
    """The content a package was made with."""
    with zipfile.ZipFile(path) as book:
        return book.read("content.txt").decode()


def answer(path: Path, into: Path) -> Outcome:
    """Answer a package; words in its content make it slow, failing or deadly.

    Where STANDIN_PIDS names a folder, the process leaves its number there, so that it can be killed.
    """
    if "STANDIN_PIDS" in os.environ:
        (Path(os.environ["STANDIN_PIDS"]) / str(os.getpid())).touch()
    try:
        content = content_of(path)
    except zipfile.BadZipFile as error:
        kind = DamagedWorkbook if path.read_bytes()[:2] == b"PK" else NotAWorkbook
        raise kind("the file is no package", advice="Send a workbook.") from error
    if "slow" in content:
        time.sleep(0.4)
    if "endless" in content:
        time.sleep(600)
    if "deadly" in content:
        os._exit(3)
    if "fails" in content:
        raise RuntimeError("an error nobody expected")
    if "always full" in content or ("full" in content and not (path.parent / "room").exists()):
        (path.parent / "room").touch()
        raise OSError(errno.ENOSPC, "No space left on device")
    if "faulty disk" in content:
        raise OSError(errno.EIO, "Input/output error")
    if "declined" in content:
        report = into / f"{path.stem}.returned.json"
        report.write_text(json.dumps({"reason": "declined"}))
        return Outcome(source=path, state="returned", report=report, text="declined")
    return _answered(path, into)


def _answered(path: Path, into: Path) -> Outcome:
    workbook = into / f"{path.stem}.answered{path.suffix}"
    shutil.copyfile(path, workbook)
    report = into / f"{path.stem}.answered.json"
    sha256 = hashlib.sha256(path.read_bytes()).hexdigest()
    report.write_text(json.dumps({"source": {"name": path.name, "sha256": sha256}, "tool": {"version": ""}}))
    return Outcome(source=path, state="answered", report=report, workbook=workbook, text="all shown")


def summarise(folder: Path) -> None:
    """Write how many answers there are."""
    count = sum(1 for _ in (folder / "answered").rglob("*.answered.json"))
    (folder / "summary.txt").write_text(str(count))
