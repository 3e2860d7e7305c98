"""Pictures for the workbooks, drawn here; none shows a real company's sign."""

from __future__ import annotations

import io
from collections.abc import Sequence

from PIL import Image, ImageDraw

DEEP, PALE, WARM = (38, 84, 124), (199, 219, 232), (214, 122, 44)


def logo() -> io.BytesIO:
    """The sign of the bush maker: two rings and a bar."""
    image = Image.new("RGB", (240, 80), "white")
    draw = ImageDraw.Draw(image)
    draw.ellipse((8, 8, 72, 72), fill=DEEP)
    draw.ellipse((24, 24, 56, 56), fill="white")
    draw.ellipse((66, 20, 106, 60), fill=WARM)
    draw.ellipse((77, 31, 95, 49), fill="white")
    draw.rectangle((118, 34, 232, 46), fill=DEEP)
    draw.rectangle((118, 54, 190, 60), fill=PALE)
    return _png(image)


def bars(heights: Sequence[float]) -> io.BytesIO:
    """A picture of a histogram, as somebody pastes it who does not send the values."""
    image = Image.new("RGB", (420, 240), "white")
    draw = ImageDraw.Draw(image)
    width = 380 / len(heights)
    for place, height in enumerate(heights):
        left = 20 + place * width
        draw.rectangle((left, 220 - 190 * height / max(heights), left + width - 3, 220), fill=DEEP)
    draw.line((20, 220, 400, 220), fill="black", width=2)
    draw.line((60, 20, 60, 220), fill=WARM, width=3)
    draw.line((360, 20, 360, 220), fill=WARM, width=3)
    return _png(image)


def _png(image: Image.Image) -> io.BytesIO:
    stream = io.BytesIO()
    image.save(stream, "PNG")
    stream.seek(0)
    return stream
