"""A service with the stand-in answerer, as a process of its own: python -m tests.folder.run_service FOLDER [WORKERS]"""

from __future__ import annotations

import sys
from pathlib import Path

from sheetqc.folder import serve
from tests.folder.standin import answer, summarise


def main() -> None:
    """Serve until ended."""
    workers = int(sys.argv[2]) if len(sys.argv) > 2 else 1
    result = serve(Path(sys.argv[1]), answer, workers=workers, settle=0.05, after=summarise)
    print(f"ended: {result.answered} answered, {result.returned} returned", flush=True)


if __name__ == "__main__":
    main()
