"""The commands. Each imports what it needs when it runs, so that --help is quick."""

from __future__ import annotations

import argparse
import sys
from collections.abc import Sequence
from pathlib import Path

import sheetqc
from sheetqc.errors import SheetqcError, UsageError

DONE, RETURNED, WRONG_USAGE = 0, 1, 2


def main(arguments: Sequence[str] | None = None) -> int:
    """Runs one command and gives its exit code: 0 all done, 1 something was returned unanswered, 2 wrong usage."""
    options = _parser().parse_args(arguments)
    try:
        code: int = options.run(options)
    except UsageError as error:
        return _complain(error, WRONG_USAGE)
    except (SheetqcError, OSError) as error:
        return _complain(error, RETURNED)
    except KeyboardInterrupt:
        return _complain("stopped", RETURNED)
    return code


def _complain(error: object, code: int) -> int:
    print(f"sheetqc: {' '.join(str(error).split())}", file=sys.stderr)
    return code


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="sheetqc", description="Answers capability studies sent as workbooks: how capable, how sure, and why."
    )
    parser.add_argument("--version", action="version", version=f"sheetqc {sheetqc.__version__}")
    commands = parser.add_subparsers(required=True, metavar="COMMAND")
    _answer_command(commands.add_parser("answer", help="answer workbooks, or folders of them, now"))
    _watch_command(commands.add_parser("watch", help="serve a folder: what is dropped in it is answered"))
    _blank_command(commands.add_parser("blank", help="write a blank intake workbook"))
    _register_command(commands.add_parser("register", help="roll answers up into one workbook"))
    _read_command(commands.add_parser("read", help="say what was understood of a workbook, without statistics"))
    _status_command(commands.add_parser("status", help="say what a served folder holds and does"))
    _verify_command(commands.add_parser("verify", help="recompute an answered workbook and compare"))
    return parser


def _answer_command(parser: argparse.ArgumentParser) -> None:
    parser.description = (
        "Answers workbooks. NAME.xlsx gives NAME.answered.xlsx and NAME.answered.json, "
        "or NAME.returned.json with the reason. The original is only read."
    )
    parser.add_argument("paths", nargs="+", type=Path, metavar="PATH", help="a workbook or a folder of workbooks")
    parser.add_argument(
        "--into", type=Path, metavar="DIR", help="folder for the results (default: beside each original)"
    )
    parser.add_argument("--workers", type=_count, default=1, metavar="N", help="processes on this machine (default 1)")
    parser.add_argument("--quiet", action="store_true", help="say nothing but errors")
    parser.set_defaults(run=_answer)


def _watch_command(parser: argparse.ArgumentParser) -> None:
    parser.description = (
        "Serves FOLDER: in/ is where workbooks are dropped; answered/, originals/ and returned/ fill up."
    )
    parser.add_argument("folder", type=Path, metavar="FOLDER")
    parser.add_argument("--once", action="store_true", help="answer what is there and end")
    parser.add_argument("--workers", type=_count, default=1, metavar="N", help="processes on this machine (default 1)")
    parser.set_defaults(run=_watch)


def _blank_command(parser: argparse.ArgumentParser) -> None:
    parser.description = "Writes a blank intake workbook to fill in."
    parser.add_argument("file", type=Path, metavar="FILE")
    parser.set_defaults(run=_blank)


def _register_command(parser: argparse.ArgumentParser) -> None:
    parser.description = "Builds the roll-up workbook from the JSON answers below FOLDER."
    parser.add_argument("folder", type=Path, metavar="FOLDER")
    parser.add_argument(
        "--into", type=Path, metavar="FILE", help="the workbook to write (default: FOLDER/register.xlsx)"
    )
    parser.set_defaults(run=_register)


def _read_command(parser: argparse.ArgumentParser) -> None:
    parser.description = "Says what was understood of a workbook: characteristics, limits, counts, questions."
    parser.add_argument("file", type=Path, metavar="FILE")
    parser.add_argument("--json", action="store_true", help="print it as JSON")
    parser.set_defaults(run=_read)


def _status_command(parser: argparse.ArgumentParser) -> None:
    parser.description = "Says what a served folder holds and does."
    parser.add_argument("folder", type=Path, metavar="FOLDER")
    parser.set_defaults(run=_status)


def _verify_command(parser: argparse.ArgumentParser) -> None:
    parser.description = "Answers the inputs of an answered workbook anew and compares every named result."
    parser.add_argument("file", type=Path, metavar="FILE")
    parser.set_defaults(run=_verify)


def _count(text: str) -> int:
    if not text.isdigit() or int(text) < 1:
        raise argparse.ArgumentTypeError(f"{text!r} is not a whole number of at least 1")
    return int(text)


def _answer(options: argparse.Namespace) -> int:
    from sheetqc.batch import answer_all, planned

    jobs, missing = planned(options.paths, options.into)
    for path in missing:
        _complain(f"there is no file or folder {path}", WRONG_USAGE)
    returned = False
    for outcome in answer_all(jobs, workers=options.workers):
        if outcome.state == "returned":
            returned = True
            _complain(f"{outcome.source.name} returned: {outcome.text}", RETURNED)
        elif not options.quiet:
            print(f"{outcome.source.name} -> {outcome.workbook}: {outcome.text}", flush=True)
    if missing:
        return WRONG_USAGE
    if not jobs:
        return _complain("no workbook found there", WRONG_USAGE)
    return RETURNED if returned else DONE


def _watch(options: argparse.Namespace) -> int:
    from sheetqc.service import watch

    return RETURNED if watch(options.folder, once=options.once, workers=options.workers) else DONE


def _blank(options: argparse.Namespace) -> int:
    from sheetqc.sheets import blank

    if options.file.suffix.lower() != ".xlsx":
        raise UsageError(f"{options.file.name} should end in .xlsx")
    if options.file.exists():
        raise UsageError(f"{options.file} is there already and is left alone; choose another name")
    if not options.file.parent.is_dir():
        raise UsageError(f"there is no folder {options.file.parent} to write {options.file.name} into")
    blank.write(options.file)
    print(options.file)
    return DONE


def _register(options: argparse.Namespace) -> int:
    from sheetqc import register

    if not options.folder.is_dir():
        raise UsageError(f"there is no folder {options.folder}")
    into = options.into or options.folder / "register.xlsx"
    rows = register.collect(options.folder)
    register.write(rows, into)
    print(into)
    return DONE


def _read(options: argparse.Namespace) -> int:
    import json

    from sheetqc import intake

    if not options.file.is_file():
        raise UsageError(f"there is no file {options.file}")
    study = intake.read(options.file)
    if options.json:
        print(json.dumps(intake.understood(study), ensure_ascii=False, indent=1))
    else:
        print(intake.understood_text(study))
    return RETURNED if intake.questions(study) else DONE


def _status(options: argparse.Namespace) -> int:
    from sheetqc import folder

    if not options.folder.is_dir():
        raise UsageError(f"there is no folder {options.folder}")
    print(folder.status(options.folder))
    return DONE


def _verify(options: argparse.Namespace) -> int:
    from sheetqc.verification import verify

    if not options.file.is_file():
        raise UsageError(f"there is no file {options.file}")
    found = verify(options.file)
    for difference in found.differences:
        print(f"{difference.name}: stored {difference.stored}, recomputed {difference.recomputed}")
    print(f"{found.compared} results compared, {len(found.differences)} differ")
    return RETURNED if found.differences else DONE
