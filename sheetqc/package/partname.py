"""The name of a part: where it is in the package and how other parts refer to it."""

from __future__ import annotations

import posixpath
from dataclasses import dataclass
from functools import lru_cache
from urllib.parse import quote, unquote


@lru_cache(maxsize=1 << 15)
def _key(text: str) -> str:
    return unquote(text.replace("\\", "/")).lstrip("/").lower()


@dataclass(frozen=True, slots=True)
class PartName:
    """The name of a part as the archive spells it, without a leading slash; "" is the package itself."""

    text: str

    @property
    def key(self) -> str:
        """What two spellings of one name have in common (case, slashes and escapes do not count)."""
        return _key(self.text)

    @property
    def folder(self) -> str:
        """Folder of the part, "" at the top."""
        return posixpath.dirname(self.text.replace("\\", "/"))

    @property
    def relationships(self) -> PartName:
        """Name of the part that lists the relationships of this one."""
        leaf = posixpath.basename(self.text.replace("\\", "/"))
        return PartName(posixpath.join(self.folder, "_rels", f"{leaf}.rels"))

    def target(self, reference: str) -> PartName | None:
        """The part that a relationship of this part refers to, or None when it leads out of the package."""
        path = unquote(reference.strip().replace("\\", "/").partition("#")[0])
        if not path:
            return None
        joined = path if path.startswith("/") else posixpath.join("/", self.folder, path)
        steps: list[str] = []
        for step in joined.split("/"):
            if step == "..":
                if not steps:
                    return None
                steps.pop()
            elif step not in ("", "."):
                steps.append(step)
        return PartName("/".join(steps)) if steps else None

    def reference_to(self, other: PartName) -> str:
        """The relative reference from this part to another one."""
        path = posixpath.relpath("/" + other.text, "/" + self.folder)
        return quote(path, safe="/!$&'()*+,;=:@-._~")
