"""A claimed file on its way through a service, and how far the service goes with it."""

from __future__ import annotations

import time
from dataclasses import dataclass, field
from pathlib import Path

from sheetqc.folder.claims import Claim
from sheetqc.folder.publish import Decision, Done

MOST_CRASHES = 3
"""Times a file may end the process that answers it alone."""

MOST_TROUBLES = 7
"""Times a try may fail for a reason outside the file."""

MOST_TRIES = 25
"""Tries begun, those included that ended with the whole service."""

_FIRST_PAUSE, _LONGEST_PAUSE = 0.25, 60.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Limits:
    """How far tries go: `seconds` of time (0: no limit), and whether failures outside a file come to an end.

    `edition` names the answerer's version: an answer is repeated only within one edition.
    """

    seconds: float
    bounded: bool
    edition: str


@dataclass(slots=True, kw_only=True)
class Case:
    """A claimed file on its way: its content as claimed, and what is decided so far."""

    claim: Claim
    sha256: str = ""
    state: tuple[int, int] = (0, 0)
    alone: bool = False
    into: Path | None = None
    decision: Decision | None = None
    done: Done | None = None
    failures: int = 0
    not_before: float = 0.0

    def later(self) -> None:
        """Put off, each time for longer."""
        self.failures += 1
        self.not_before = time.monotonic() + min(_FIRST_PAUSE * 2.0 ** (self.failures - 1), _LONGEST_PAUSE)


@dataclass(slots=True)
class Tally:
    """What this service has done."""

    answered: int = 0
    returned: int = 0
    left: list[str] = field(default_factory=list)
    given_up: set[Path] = field(default_factory=set)
    """Files given back to in/ that this service must not take again."""
