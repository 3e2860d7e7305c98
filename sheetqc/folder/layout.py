"""The places of a served folder. A file's state is the place it is in."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path


@dataclass(frozen=True, slots=True)
class Layout:
    """The places below `root`."""

    root: Path

    @property
    def inbox(self) -> Path:
        """Where files are dropped."""
        return self.root / "in"

    @property
    def working(self) -> Path:
        """One folder per claimed file."""
        return self.root / "working"

    @property
    def answered(self) -> Path:
        """Answered copies with their JSON."""
        return self.root / "answered"

    @property
    def originals(self) -> Path:
        """The dropped files that were answered, untouched."""
        return self.root / "originals"

    @property
    def returned(self) -> Path:
        """The dropped files that could not be answered, each with its reason."""
        return self.root / "returned"

    @property
    def own(self) -> Path:
        """What the service keeps for itself; may be deleted while no service runs."""
        return self.root / ".sheetqc"

    @property
    def owners(self) -> Path:
        """Signs of life of the services on this folder."""
        return self.own / "owners"

    @property
    def names(self) -> Path:
        """Reserved names of results about to be moved into place."""
        return self.own / "names"

    @property
    def errors(self) -> Path:
        """What went wrong unexpectedly, a file each."""
        return self.own / "errors"

    @property
    def logs(self) -> Path:
        """Rotating log files."""
        return self.own / "log"

    @property
    def journal(self) -> Path:
        """What was answered, by content."""
        return self.own / "journal.sqlite"

    @property
    def due(self) -> Path:
        """Exists while results have been moved into place that the summary does not hold yet."""
        return self.own / "summary-due"

    def create(self) -> None:
        """Make every place that is missing."""
        for place in (self.inbox, self.working, self.answered, self.originals, self.returned):
            place.mkdir(parents=True, exist_ok=True)
        self.create_own()

    def create_own(self) -> None:
        """Make the service's own places that are missing."""
        for place in (self.owners, self.names, self.errors, self.logs):
            place.mkdir(parents=True, exist_ok=True)

    def reachable(self) -> bool:
        """Whether the folder is there. A vanished share leaves at best an empty mount point, which has no in/."""
        return self.inbox.is_dir()
