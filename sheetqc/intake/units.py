"""Units that people type, and how they convert."""

from __future__ import annotations

import unicodedata

_SIZES: dict[str, dict[str, float]] = {
    "length": {
        "m": 1.0, "dm": 1e-1, "cm": 1e-2, "mm": 1e-3, "μm": 1e-6, "um": 1e-6, "mic": 1e-6, "micron": 1e-6,
        "microns": 1e-6, "nm": 1e-9, "in": 0.0254, "inch": 0.0254, "inches": 0.0254, '"': 0.0254, "mil": 2.54e-5,
        "ft": 0.3048,
    },
    "mass": {"t": 1e3, "kg": 1.0, "g": 1e-3, "mg": 1e-6, "μg": 1e-9, "ug": 1e-9, "lb": 0.45359237},
    "pressure": {
        "Pa": 1.0, "hPa": 1e2, "kPa": 1e3, "MPa": 1e6, "GPa": 1e9, "bar": 1e5, "mbar": 1e2, "N/mm2": 1e6,
        "psi": 6894.757293168361,
    },
    "force": {"N": 1.0, "mN": 1e-3, "cN": 1e-2, "daN": 10.0, "kN": 1e3, "MN": 1e6},
    "torque": {"Nm": 1.0, "N·m": 1.0, "N*m": 1.0, "N m": 1.0, "Ncm": 1e-2, "mNm": 1e-3, "Nmm": 1e-3, "kNm": 1e3},
    "time": {"s": 1.0, "sec": 1.0, "ms": 1e-3, "μs": 1e-6, "us": 1e-6, "min": 60.0, "h": 3600.0},
    "angle": {"°": 1.0, "deg": 1.0, "grad": 0.9, "rad": 57.29577951308232, "'": 1 / 60, "′": 1 / 60},
    "voltage": {"V": 1.0, "mV": 1e-3, "μV": 1e-6, "kV": 1e3},
    "current": {"A": 1.0, "mA": 1e-3, "μA": 1e-6, "uA": 1e-6},
    "resistance": {"Ω": 1.0, "Ohm": 1.0, "ohm": 1.0, "mΩ": 1e-3, "kΩ": 1e3, "kOhm": 1e3, "MΩ": 1e6},
    "volume": {"l": 1.0, "L": 1.0, "ml": 1e-3, "mL": 1e-3, "cm3": 1e-3, "ccm": 1e-3, "μl": 1e-6},
    "flow": {"l/min": 1.0, "l/h": 1 / 60, "ml/min": 1e-3, "ml/h": 1e-3 / 60, "cm3/min": 1e-3},
    "share": {"%": 1e-2, "‰": 1e-3, "ppm": 1e-6},
    "temperature": {"°C": 1.0},
    "hardness": {"HV": 1.0},
}  # fmt: skip
"""Sizes by dimension; the letter case matters (mN, MN)."""

_BY_UNIT = {unit: (dimension, size) for dimension, sizes in _SIZES.items() for unit, size in sizes.items()}


def unit_key(text: str) -> str:
    """A unit as it is compared: without brackets, blanks around and look-alike letters."""
    folded = unicodedata.normalize("NFKC", text).strip().strip("[]()").strip()
    return folded.replace("Ω", "Ω").replace("µ", "μ").replace("º", "°")


def is_unit(text: str) -> bool:
    """Whether a text is a unit that is known."""
    return unit_key(text) in _BY_UNIT or unit_key(text).lower() in _BY_UNIT


def factor(typed: str, wanted: str) -> float | None:
    """The factor from a typed unit to the wanted one: 1 for the same, None when they do not convert."""
    first, second = unit_key(typed), unit_key(wanted)
    one, other = _known(first), _known(second)
    if one is not None and other is not None:
        return one[1] / other[1] if one[0] == other[0] else None
    return 1.0 if first.casefold() == second.casefold() else None


def _known(unit: str) -> tuple[str, float] | None:
    return _BY_UNIT.get(unit) or _BY_UNIT.get(unit.lower())
