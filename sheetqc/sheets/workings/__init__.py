"""The workings of a characteristic: the live formulas behind the page, right of it on the same sheet."""
