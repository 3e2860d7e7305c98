"""`python -m sheetqc` is the command `sheetqc`."""

from sheetqc.cli import main

if __name__ == "__main__":
    raise SystemExit(main())
