"""The studies that reach the incoming quality office of a pump maker, from suppliers that do not exist.

The true capability behind each column was chosen; the readings are drawn from it. Parts, companies and people are
invented.
"""

from __future__ import annotations

import datetime

from tests.examples.draws import Draw, read, several
from tests.examples.study import Asked, Entry, subgroups, times


def shaft() -> Asked:
    """A pump shaft: a diameter well within its limits, a runout and a roughness limited above."""
    d, ro, ra = Draw("shaft/D12"), Draw("shaft/RO3"), Draw("shaft/RA2")
    count = 125
    return Asked(
        title="Capability study of a turned part",
        header={
            "Part number": "QP-2041-C",
            "Part name": "Pump shaft",
            "Supplier": "Tolvren Turned Parts",
            "Lot": "T-2608",
            "Date": datetime.date(2026, 2, 12),
            "Prepared by": "R. Oxmere",
            "Requirement": 1.33,
            "Study": "ongoing",
        },
        characteristics=[
            {
                "Id": "D12",
                "Name": "Bearing seat diameter",
                "Unit": "mm",
                "Nominal": 12.0,
                "LSL": 11.985,
                "USL": 12.015,
                "Kind": "two-sided dimension",
                "Resolution": 0.0005,
                "Class": "critical",
            },
            {"Id": "RO3", "Name": "Runout of the seal seat", "Unit": "µm", "USL": 30.0, "Kind": "runout"}
            | {"Natural lower bound": 0.0, "Resolution": 0.1},
            {"Id": "RA2", "Name": "Roughness Ra of the seal seat", "Unit": "µm", "USL": 0.8, "Kind": "roughness"}
            | {"Natural lower bound": 0.0, "Resolution": 0.01},
        ],
        columns={
            "Subgroup": subgroups(25, 5),
            "Time": times("2026-02-09T06:00", 7, count),
            "D12": read(several(count, lambda: d.normal(12.0004, 0.0019)), "0.0005"),
            "RO3": read(several(count, lambda: ro.rayleigh(4.6)), "0.1"),
            "RA2": read(several(count, lambda: ra.lognormal(0.35, 0.205)), "0.01"),
        },
        decimals={"D12": 4, "RO3": 1, "RA2": 2},
    )


def seal_ring() -> Asked:
    """A seal ring: the flatness of its face, skewed towards its upper limit, and its height."""
    fl, h = Draw("seal-ring/FL1"), Draw("seal-ring/H2")
    count = 100
    return Asked(
        title="Capability study of a lapped part",
        header={
            "Part number": "QP-3310-A",
            "Part name": "Seal ring",
            "Supplier": "Ambrisk Seal Rings",
            "Lot": "26-0117",
            "Date": datetime.date(2026, 1, 23),
            "Prepared by": "I. Sorrelby",
            "Requirement": 1.33,
        },
        characteristics=[
            {"Id": "FL1", "Name": "Flatness of the seal face", "Unit": "µm", "USL": 0.9, "Kind": "flatness"}
            | {"Natural lower bound": 0.0, "Resolution": 0.01, "Class": "critical"},
            {"Id": "H2", "Name": "Height", "Unit": "mm", "Nominal": 8.0, "LSL": 7.95, "USL": 8.05}
            | {"Kind": "two-sided dimension", "Resolution": 0.001},
        ],
        columns={
            "Piece": list(range(1, count + 1)),
            "FL1": read(several(count, lambda: fl.lognormal(0.38, 0.27)), "0.01"),
            "H2": read(several(count, lambda: h.normal(8.004, 0.0098)), "0.001"),
        },
        decimals={"FL1": 2, "H2": 3},
    )


def pump_housing() -> Asked:
    """A pump housing whose bore moves with every new setting of the tool, so that the process is not steady."""
    b, t, setting = Draw("housing/B35"), Draw("housing/T6"), Draw("housing/setting")
    moved = [setting.normal(0.0, 0.0024) for _ in range(25)]
    bore = [b.normal(35.0125 + moved[group], 0.0015) for group in range(25) for _ in range(5)]
    return Asked(
        title="Capability study of a machined casting",
        header={
            "Part number": "QP-1007-F",
            "Part name": "Pump housing",
            "Supplier": "Gullhaven Castings",
            "Lot": "H 884",
            "Date": datetime.date(2026, 2, 27),
            "Prepared by": "M. Quernlow",
            "Requirement": 1.67,
            "Study": "preliminary",
        },
        characteristics=[
            {"Id": "B35", "Name": "Bearing bore diameter", "Unit": "mm", "Nominal": 35.0, "LSL": 35.0, "USL": 35.025}
            | {"Kind": "two-sided dimension", "Resolution": 0.001, "Class": "critical"},
            {"Id": "T6", "Name": "Depth of the bearing bore", "Unit": "mm", "Nominal": 6.5, "LSL": 6.4, "USL": 6.6}
            | {"Kind": "two-sided dimension", "Resolution": 0.005},
        ],
        columns={
            "Subgroup": subgroups(25, 5),
            "Time": times("2026-02-23T06:00", 12, 125),
            "B35": read(bore, "0.001"),
            "T6": read(several(125, lambda: t.normal(6.497, 0.026)), "0.005"),
        },
        decimals={"B35": 3, "T6": 3},
    )


def shaft_seal_leak() -> Asked:
    """A leak test: a skewed rate below an upper limit, some readings left out with their reasons."""
    lk = Draw("leak/LK1")
    rates = read(several(124, lambda: lk.lognormal(0.62, 0.42)), "0.01")
    reasons: list[Entry] = [None] * 124
    for row, rate, reason in (
        (17, 9.99, "Clamp not closed, part tested again as the next one"),
        (18, 9.99, "Clamp not closed, part tested again as the next one"),
        (63, 0.0, "Air supply off during the test"),
        (101, 4.82, "Master leak, not a part"),
    ):
        rates[row], reasons[row] = rate, reason
    return Asked(
        title="Leak test record",
        header={
            "Part number": "QP-3300-B",
            "Part name": "Shaft seal, assembled",
            "Supplier": "Ambrisk Seal Rings",
            "Lot": "26-0120",
            "Date": datetime.date(2026, 1, 30),
            "Prepared by": "I. Sorrelby",
            "Requirement": 1.33,
            "Note": "Water at 6 bar, 20 degrees",
        },
        characteristics=[
            {"Id": "LK1", "Name": "Leak rate", "Unit": "ml/h", "USL": 3.0, "Kind": "leak rate"}
            | {"Natural lower bound": 0.0, "Resolution": 0.01, "Class": "critical"},
        ],
        columns={"Time": times("2026-01-28T06:00", 4, 124), "LK1": rates, "Leave out": reasons},
        decimals={"LK1": 2},
    )


def burst_pressure() -> Asked:
    """A destructive test: forty expansion vessels, a lower limit only."""
    bp = Draw("burst/BP1")
    return Asked(
        title="Burst test record",
        header={
            "Part number": "QP-5120-A",
            "Part name": "Pressure shell",
            "Supplier": "Merrowick Mouldings",
            "Lot": "PS-31",
            "Date": datetime.date(2026, 2, 5),
            "Prepared by": "A. Hallbeck",
            "Requirement": 1.33,
        },
        characteristics=[
            {"Id": "BP1", "Name": "Burst pressure", "Unit": "bar", "LSL": 16.0, "Kind": "burst pressure"}
            | {"Resolution": 0.1, "Class": "critical", "Note": "Destructive: each part is tested once"},
        ],
        columns={"No": list(range(1, 41)), "BP1": read(several(40, lambda: bp.weibull(31.0, 15.0)), "0.1")},
        decimals={"BP1": 1},
    )


def impeller() -> Asked:
    """A moulded impeller from two cavities that do not make the same part."""
    od, m = Draw("impeller/OD1"), Draw("impeller/M2")
    count = 120
    cavity = [1 + i % 2 for i in range(count)]
    return Asked(
        title="Capability study of a moulded part",
        header={
            "Part number": "QP-4408-D",
            "Part name": "Impeller",
            "Supplier": "Merrowick Mouldings",
            "Lot": "IM-0612",
            "Date": datetime.date(2026, 2, 18),
            "Prepared by": "A. Hallbeck",
            "Requirement": 1.33,
            "Study": "ongoing",
        },
        characteristics=[
            {"Id": "OD1", "Name": "Outer diameter", "Unit": "mm", "Nominal": 62.4, "LSL": 62.25, "USL": 62.55}
            | {"Kind": "two-sided dimension", "Resolution": 0.005},
            {"Id": "M2", "Name": "Mass", "Unit": "g", "Nominal": 18.5, "LSL": 17.9, "USL": 19.1, "Kind": "mass"}
            | {"Resolution": 0.01},
        ],
        columns={
            "Time": times("2026-02-16T06:00", 3, count),
            "Stream": [f"Cavity {number}" for number in cavity],
            "OD1": read([od.normal(62.375 if number == 1 else 62.435, 0.02) for number in cavity], "0.005"),
            "M2": read(several(count, lambda: m.normal(18.52, 0.085)), "0.01"),
        },
        decimals={"OD1": 3, "M2": 2},
    )


def shaft_sleeve() -> Asked:
    """A coated sleeve whose supplier claims more than the readings carry."""
    ct = Draw("sleeve/CT1")
    return Asked(
        title="Coating record",
        header={
            "Part number": "QP-2055-B",
            "Part name": "Shaft sleeve, coated",
            "Supplier": "Sorrelund Surfaces",
            "Lot": "C-77",
            "Date": datetime.date(2026, 3, 1),
            "Prepared by": "T. Venbrook",
            "Requirement": 1.33,
            "Requirement on": "Ppk",
        },
        characteristics=[
            {"Id": "CT1", "Name": "Coating thickness", "Unit": "µm", "Nominal": 20.0, "LSL": 15.0, "USL": 25.0}
            | {"Kind": "coating thickness", "Resolution": 0.1, "Claimed index": "Ppk", "Claimed value": 1.9},
        ],
        columns={
            "Piece": list(range(1, 101)),
            "CT1": read(several(100, lambda: ct.normal(19.4, 1.65)), "0.1"),
        },
        decimals={"CT1": 1},
    )


def bearing_bush() -> Asked:
    """A bearing bush; its record stands in the supplier's own layout."""
    d, length = Draw("bush/D31"), Draw("bush/L7")
    count = 80
    return Asked(
        title="Prüfbericht Prozessfähigkeit",
        header={
            "Teilenummer": "QP-6102-A",
            "Benennung": "Lagerbuchse",
            "Lieferant": "Vintrask Gleitlager",
            "Charge": "LB 5/26",
            "Prüfdatum": datetime.date(2026, 2, 20),
            "Erstellt von": "K. Windau",
            "Anforderung": 1.33,
        },
        characteristics=[
            {"Nr": "D31", "Merkmal": "Außendurchmesser", "Einheit": "mm", "Nennmaß": 16.0, "UGW": 15.99, "OGW": 16.01}
            | {"Art": "Durchmesser", "Auflösung": 0.0005},
            {"Nr": "L7", "Merkmal": "Länge", "Einheit": "mm", "Nennmaß": 22.0, "UGW": 21.9, "OGW": 22.1}
            | {"Art": "Länge", "Auflösung": 0.005},
        ],
        columns={
            "Lfd Nr": list(range(1, count + 1)),
            "D31": read(several(count, lambda: d.normal(16.0003, 0.0021)), "0.0005"),
            "L7": read(several(count, lambda: length.normal(21.992, 0.021)), "0.005"),
        },
        decimals={"D31": 4, "L7": 3},
    )


def wear_ring() -> Asked:
    """A wear ring, recorded in a workbook with macros."""
    w = Draw("wear-ring/W4")
    return Asked(
        title="Wear ring, serial measurement",
        header={
            "Part number": "QP-1190-C",
            "Part name": "Wear ring",
            "Supplier": "Gullhaven Castings",
            "Lot": "W 903",
            "Date": datetime.date(2026, 2, 11),
            "Prepared by": "M. Quernlow",
            "Requirement": 1.33,
            "Study": "ongoing",
        },
        characteristics=[
            {"Id": "W4", "Name": "Width", "Unit": "mm", "Nominal": 9.5, "LSL": 9.42, "USL": 9.58}
            | {"Kind": "two-sided dimension", "Resolution": 0.001, "Subgroup size": 4},
        ],
        columns={
            "Time": times("2026-02-10T06:00", 9, 100),
            "W4": read(several(100, lambda: w.normal(9.5035, 0.0196)), "0.001"),
        },
        decimals={"W4": 3},
    )


def cover_plate() -> Asked:
    """First samples: twelve parts, which are too few for a statement."""
    f, t = Draw("cover/FL5"), Draw("cover/T8")
    return Asked(
        title="First samples",
        header={
            "Part number": "QP-1022-A",
            "Part name": "Cover plate",
            "Supplier": "Gullhaven Castings",
            "Lot": "Sample 1",
            "Date": datetime.date(2026, 3, 2),
            "Prepared by": "M. Quernlow",
            "Study": "preliminary",
        },
        characteristics=[
            {"Id": "FL5", "Name": "Flatness of the flange", "Unit": "µm", "USL": 60.0, "Kind": "flatness"}
            | {"Natural lower bound": 0.0, "Resolution": 1.0},
            {"Id": "T8", "Name": "Flange thickness", "Unit": "mm", "Nominal": 11.0, "LSL": 10.8, "USL": 11.2}
            | {"Kind": "two-sided dimension", "Resolution": 0.01},
        ],
        columns={
            "Piece": list(range(1, 13)),
            "FL5": read(several(12, lambda: f.lognormal(24.0, 0.25)), "1"),
            "T8": read(several(12, lambda: t.normal(11.01, 0.03)), "0.01"),
        },
        decimals={"FL5": 0, "T8": 2},
    )


def coupling_hub() -> Asked:
    """A coupling hub, with a cover sheet that waits for the results."""
    k, b = Draw("hub/D12"), Draw("hub/BR1")
    count = 100
    return Asked(
        title="Capability study of a broached part",
        header={
            "Part number": "QP-2210-B",
            "Part name": "Coupling hub",
            "Supplier": "Tolvren Turned Parts",
            "Lot": "T-2611",
            "Date": datetime.date(2026, 2, 25),
            "Prepared by": "R. Oxmere",
            "Requirement": 1.33,
        },
        characteristics=[
            {"Id": "D12", "Name": "Bore diameter", "Unit": "mm", "Nominal": 12.009, "LSL": 12.0, "USL": 12.018}
            | {"Kind": "two-sided dimension", "Resolution": 0.0005},
            {"Id": "BR1", "Name": "Width of the keyway", "Unit": "mm", "Nominal": 4.0, "LSL": 3.97, "USL": 4.03}
            | {"Kind": "two-sided dimension", "Resolution": 0.001},
        ],
        columns={
            "Piece": list(range(1, count + 1)),
            "D12": read(several(count, lambda: k.normal(12.0094, 0.0013)), "0.0005"),
            "BR1": read(several(count, lambda: b.normal(4.0025, 0.0072)), "0.001"),
        },
        decimals={"D12": 4, "BR1": 3},
    )
