"""Which characteristic a text means."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Callable, Sequence

from sheetqc import vocabulary
from sheetqc.study import Characteristic

_BRACKETED = re.compile(r"^(?P<name>.*\S)\s*[\[(](?P<unit>[^\[\]()]{1,12})[\])]$", re.DOTALL)


def folded(text: str) -> str:
    """A text as Ids are compared: no case, no blanks, no full-width forms; punctuation counts (1.2 is not 12)."""
    return "".join(unicodedata.normalize("NFKC", text).casefold().split())


class Names:
    """Finds characteristics by their Id or Name as people write them in headings."""

    def __init__(self, characteristics: Sequence[Characteristic]) -> None:
        self.ids = tuple(c.id for c in characteristics)
        self._characteristics = tuple(characteristics)
        self._known: dict[str, str | None] = {}

    def exact(self, text: str) -> str | None:
        """The Id of the characteristic whose Id or Name the text is, but for case, blanks and punctuation."""
        if text not in self._known:
            self._known[text] = self._exact(text)
        return self._known[text]

    def _exact(self, text: str) -> str | None:
        return (
            self._unique(folded(text), lambda c: folded(c.id))
            or self._unique(folded(text), lambda c: folded(c.name))
            or self._unique(vocabulary.key(text), lambda c: vocabulary.key(c.id))
            or self._unique(vocabulary.key(text), lambda c: vocabulary.key(c.name))
        )

    def loose(self, text: str) -> str | None:
        """As `exact`, also for headings that say more: "D12 [mm]", "D12 Bore diameter", "D12: value 3"."""
        bare, _ = without_unit(text)
        return (
            self.exact(bare)
            or self._unique(vocabulary.key(bare), lambda c: vocabulary.key(c.id + c.name))
            or self._unique(vocabulary.key(bare), lambda c: vocabulary.key(c.name + c.id))
            or self._beginning(bare)
        )

    def candidates(self, text: str) -> tuple[str, ...]:
        """The Ids of all characteristics that a text may mean, where it means more than one."""
        bare = vocabulary.key(without_unit(text)[0])
        found = [c.id for c in self._characteristics if bare and bare in (vocabulary.key(c.id), vocabulary.key(c.name))]
        return tuple(found) if len(found) > 1 else ()

    def _unique(self, wanted: str, form: Callable[[Characteristic], str]) -> str | None:
        if not wanted:
            return None
        found = [c.id for c in self._characteristics if form(c) == wanted]
        return found[0] if len(found) == 1 else None

    def _beginning(self, text: str) -> str | None:
        """The characteristic whose Id is the text's first word; an Id of digits alone would say too little."""
        first = re.split(r"[\s:/(\[]", unicodedata.normalize("NFKC", text).strip(), maxsplit=1)[0]
        if not any(c.isalpha() for c in first):
            return None
        return self._unique(folded(first), lambda c: folded(c.id))


def without_unit(text: str) -> tuple[str, str]:
    """A heading parted into the name and the unit in brackets behind it ("" when there is none)."""
    match = _BRACKETED.match(unicodedata.normalize("NFKC", text).strip())
    return (text, "") if match is None else (match["name"], match["unit"].strip())
