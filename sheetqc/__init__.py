"""sheetqc: answers capability studies sent as workbooks."""

__version__ = "0.1.0"
