"""Colours of a theme as plain red, green and blue, so that they mean the same under another theme."""

from __future__ import annotations

import colorsys

from sheetqc.package.xml import Element, local

# The order in which styles count the colours of a theme; light and dark are swapped against the theme's own order.
_ORDER = (
    "lt1",
    "dk1",
    "lt2",
    "dk2",
    "accent1",
    "accent2",
    "accent3",
    "accent4",
    "accent5",
    "accent6",
    "hlink",
    "folHlink",
)
_USUAL = (
    "FFFFFF",
    "000000",
    "EEECE1",
    "1F497D",
    "4F81BD",
    "C0504D",
    "9BBB59",
    "8064A2",
    "4BACC6",
    "F79646",
    "0000FF",
    "800080",
)


def theme_colours(theme: Element | None) -> tuple[str, ...]:
    """The colours of a theme (RRGGBB) in the order of styles; the usual ones where the theme is silent."""
    found: dict[str, str] = {}
    if theme is not None:
        for scheme in (e for e in theme.iter() if local(e) == "clrScheme"):
            for slot in scheme:
                value = next((v.get("lastClr") or v.get("val") for v in slot), None)
                if value and len(value) == 6:
                    found.setdefault(local(slot), value.upper())
    return tuple(found.get(name, usual) for name, usual in zip(_ORDER, _USUAL, strict=True))


def make_plain(element: Element, theme: tuple[str, ...]) -> None:
    """Replaces every theme colour below an element by its red, green and blue."""
    for colour in element.iter():
        number = colour.get("theme") if isinstance(colour.tag, str) else None
        if number is None or not number.isdigit() or int(number) >= len(theme):
            continue
        rgb = _tinted(theme[int(number)], float(colour.get("tint", "0")))
        del colour.attrib["theme"]
        if "tint" in colour.attrib:
            del colour.attrib["tint"]
        colour.set("rgb", f"FF{rgb}")


def _tinted(rgb: str, tint: float) -> str:
    """A colour made lighter (tint above zero) or darker (below) in its lightness."""
    if tint == 0:
        return rgb
    red, green, blue = (int(rgb[i : i + 2], 16) / 255 for i in (0, 2, 4))
    hue, light, saturation = colorsys.rgb_to_hls(red, green, blue)
    light = light * (1 + tint) if tint < 0 else light * (1 - tint) + tint
    return "".join(f"{round(255 * value):02X}" for value in colorsys.hls_to_rgb(hue, light, saturation))
