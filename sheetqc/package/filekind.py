"""What a file is, by what it holds and not by its name."""

from __future__ import annotations

from pathlib import Path
from typing import BinaryIO

from sheetqc.package import compound
from sheetqc.package.archive import Archive
from sheetqc.package.partname import PartName
from sheetqc.package.refusals import encrypted, missing, not_a_workbook

ODS = b"application/vnd.oasis.opendocument.spreadsheet"


def container(path: Path) -> str:
    """What holds the workbook: "zip" for an archive (to be looked into), "xls" for the old binary kind.

    Raises
    ------
    MissingWorkbook, NotAWorkbook, EncryptedWorkbook : what is met
    """
    try:
        file = path.open("rb")
    except FileNotFoundError as error:
        raise missing(path.name) from error
    except (IsADirectoryError, PermissionError) as error:
        if path.is_dir():
            raise not_a_workbook(f"{path.name} is a folder") from error
        raise
    with file:
        start = file.read(8)
        if not start:
            raise not_a_workbook("the file is empty")
        if start == compound.MAGIC:
            return _old_kind(file)
        if start[:2] != b"PK":
            raise not_a_workbook("the file is neither a workbook nor an archive")
        return "zip"


def _old_kind(file: BinaryIO) -> str:
    streams = compound.stream_starts(file)
    if "EncryptedPackage" in streams or "EncryptionInfo" in streams:
        raise encrypted()
    if "Workbook" in streams or "Book" in streams:
        if compound.workbook_has_password(file, streams):
            raise encrypted()
        return "xls"
    raise not_a_workbook("the file is a document of another program")


def archive_kind(archive: Archive) -> str:
    """What an archive holds: "zip" for a package (to be looked into), "ods" for a workbook of another make."""
    mimetype = archive.member(PartName("mimetype"))
    if mimetype is None:
        return "zip"
    if not archive.read(mimetype).strip().startswith(ODS):
        raise not_a_workbook("the file is a document of another program")
    manifest = archive.member(PartName("META-INF/manifest.xml"))
    if manifest is not None and b"encryption-data" in archive.read(manifest):
        raise encrypted()
    return "ods"
