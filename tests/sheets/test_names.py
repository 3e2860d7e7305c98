from __future__ import annotations

import re

import pytest

from sheetqc.sheets.names import defined_name, safe_ids
from tests.sheets.conftest import Written


@pytest.mark.parametrize(
    ("ids", "safe"),
    [
        (("D12",), ("D12",)),
        (("L 3", "L_3"), ("L_3", "L_3_2")),
        (("Ø25 H7", "a", "A"), ("_25_H7", "a", "A_2")),
        (("", "  "), ("_", "__2")),
    ],
)
def test_ids_are_made_safe_and_stay_apart(ids: tuple[str, ...], safe: tuple[str, ...]) -> None:
    assert safe_ids(ids) == safe


def test_a_name_says_characteristic_and_quantity() -> None:
    assert defined_name("D12", "Ppk") == "qc.D12.Ppk"


def test_results_have_defined_names_with_their_values(written: Written) -> None:
    book, values = written.formulas(), written.values()
    first = written.answer.assessments[0]
    assert first.summary is not None
    assert first.indices.Ppk is not None
    expected = {
        "Ppk": first.indices.Ppk.estimate,
        "Ppk_lower": first.indices.Ppk.lower,
        "Ppk_upper": first.indices.Ppk.upper,
        "Mean": first.summary.mean,
        "s": first.summary.s,
        "n": first.count,
        "Verdict": first.verdict.state,
    }
    for quantity, value in expected.items():
        sheet, _, address = book.defined_names[f"qc.D12.{quantity}"].attr_text.rpartition("!")
        stored = values[sheet.strip("'")][address.replace("$", "")].value
        assert stored == (value if isinstance(value, str) else pytest.approx(value, rel=1e-11))


def test_every_name_is_legal_and_listed_with_its_value(written: Written) -> None:
    book, values = written.formulas(), written.values()
    # qc.sheet.N mark the sheets themselves
    names = [n for n in book.defined_names if n.startswith("qc.") and not n.startswith("qc.sheet.")]
    assert len(names) > 60
    assert all(re.fullmatch(r"qc\.[A-Za-z0-9_.]+", n) for n in names)
    listed = {row[0].value for row in values[written.names[-1]].iter_rows()}
    assert set(names) <= listed
