"""A scatter chart that leaves no setting to a default.

The writer omits what was the default in 2007; in a copy of a workbook of a later version the same omissions mean the
opposite (smoothed lines, legend keys in labels, rounded corners).
"""

from __future__ import annotations

from xlsxwriter import Workbook
from xlsxwriter.chart_scatter import ChartScatter


class ExplicitScatter(ChartScatter):  # type: ignore[misc]
    """Writes the settings out that the writer takes for granted."""

    def _say(self, element: str, value: object) -> None:
        self._xml_empty_tag(f"c:{element}", [("val", value)])

    def _write_lang(self) -> None:
        super()._write_lang()
        self._say("roundedCorners", 0)

    def _write_scatter_style(self, val: str) -> None:
        super()._write_scatter_style(val)
        self._say("varyColors", 0)

    def _write_c_smooth(self, smooth: object) -> None:
        self._say("smooth", 1 if smooth else 0)

    def _write_show_val(self) -> None:
        for element in ("showLegendKey", "showVal", "showCatName", "showSerName", "showPercent", "showBubbleSize"):
            self._say(element, 1 if element == "showVal" else 0)

    def _write_scaling(self, *arguments: object) -> None:
        super()._write_scaling(*arguments)
        self._say("delete", 0)

    def _write_disp_blanks_as(self) -> None:
        self._say("dispBlanksAs", "gap")


def scatter(workbook: Workbook) -> ExplicitScatter:
    """A new scatter chart of straight lines."""
    chart = workbook.add_chart({"type": "scatter", "subtype": "straight"})
    chart.__class__ = ExplicitScatter
    return chart  # type: ignore[no-any-return]
