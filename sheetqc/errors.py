"""The errors of sheetqc, drawn as a tree.

    SheetqcError
    ├── UsageError              the command or call was wrong; nothing was attempted
    └── WorkbookError           a workbook that cannot be served
        ├── MissingWorkbook     no such file
        ├── NotAWorkbook        the file is something else
        ├── EncryptedWorkbook   protected by a password
        ├── DamagedWorkbook     truncated or corrupt
        ├── UnsafeWorkbook      breaks a limit that protects this machine
        ├── NothingToAnswer     no tag, or nothing usable below one
        ├── CannotGraft         readable, but new sheets cannot be added to a copy
        └── UnforeseenTrouble   a fault of sheetqc itself

Each error says where (file, sheet, cell), what was met, what was expected and what to do.
A doubt about data is not an error: it is a `sheetqc.finding.Finding`.
"""

from __future__ import annotations

from pathlib import Path

from sheetqc.finding import Cell, Finding


class SheetqcError(Exception):
    """Whatever sheetqc raises on purpose."""


class UsageError(SheetqcError):
    """The call itself is wrong; exit code 2."""


class WorkbookError(SheetqcError):
    """A workbook that cannot be served.

    Parameters
    ----------
    met : what was found, as a sentence without a full stop
    expected : what should have been there, or ""
    advice : what the reader should do, as a sentence, or ""
    file : the workbook, when known
    cell : the place in it, when there is one
    findings : what else was noticed before it was given up
    """

    code = "workbook"

    def __init__(
        self,
        met: str,
        *,
        expected: str = "",
        advice: str = "",
        file: Path | None = None,
        cell: Cell | None = None,
        findings: tuple[Finding, ...] = (),
    ) -> None:
        self.met = met
        self.expected = expected
        self.advice = advice
        self.file = file
        self.cell = cell
        self.findings = findings
        super().__init__(met, expected, advice, file, cell)

    def __str__(self) -> str:
        where = f"{self.cell}: " if self.cell else ""
        expected = f"; expected {self.expected}" if self.expected else ""
        advice = f" {self.advice}" if self.advice else ""
        return f"{where}{self.met}{expected}.{advice}"

    def __reduce__(self) -> tuple[object, ...]:
        return _rebuild, (type(self), self.met, self.expected, self.advice, self.file, self.cell, self.findings)


def _rebuild(
    kind: type[WorkbookError],
    met: str,
    expected: str,
    advice: str,
    file: Path | None,
    cell: Cell | None,
    findings: tuple[Finding, ...],
) -> WorkbookError:
    return kind(met, expected=expected, advice=advice, file=file, cell=cell, findings=findings)


class MissingWorkbook(WorkbookError):
    """No such file."""

    code = "missing-file"


class NotAWorkbook(WorkbookError):
    """The file is not a workbook."""

    code = "not-a-workbook"


class EncryptedWorkbook(WorkbookError):
    """Protected by a password."""

    code = "encrypted"


class DamagedWorkbook(WorkbookError):
    """Truncated or corrupt."""

    code = "damaged"


class UnsafeWorkbook(WorkbookError):
    """Breaks a limit that protects this machine."""

    code = "unsafe"


class NothingToAnswer(WorkbookError):
    """No tag, or nothing usable below one."""

    code = "nothing-to-answer"


class CannotGraft(WorkbookError):
    """Readable, but new sheets cannot be added to a copy."""

    code = "cannot-graft"


class UnforeseenTrouble(WorkbookError):
    """A fault of sheetqc itself, met on this workbook."""

    code = "unforeseen"
