"""The site file while it may still be wrong: what each key holds, as far as it holds something usable.

Checks across keys run on this, so that one wrong key does not hide what is wrong with others.
"""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import Any

from routing.site.fields import default_of
from routing.site.models import REPEATED, SECTIONS, SiteModel


class Draft:
    """Usable values by dotted key, defaults filled in.

    Parameters
    ----------
    raw
        The site file as the TOML reader gives it.
    refused
        Dotted keys whose values cannot be used.
    folder
        Folder that paths start from.
    """

    def __init__(self, raw: Mapping[str, Any], refused: set[str], folder: Path) -> None:
        self.folder = folder
        self._given: dict[str, Any] = {}
        self._defaults: dict[str, Any] = {}
        self.sections: list[str] = []
        for section, model in SECTIONS.items():
            tables = _tables(section, raw.get(section))
            if section not in raw and section not in REPEATED and not SiteModel.model_fields[section].is_required():
                tables = {section: {}}
            for prefix, table in tables.items():
                self.sections.append(prefix)
                for name, info in model.model_fields.items():
                    key = f"{prefix}.{name}"
                    if key in refused:
                        continue
                    if name in table:
                        self._given[key] = table[name]
                    else:
                        self._defaults[key] = default_of(info)

    def given(self, key: str) -> bool:
        """Return whether the file gives the key a usable value."""
        return key in self._given

    def number(self, key: str) -> float | None:
        """Return the number a key holds, or its default; ``None`` where there is none or it cannot be used."""
        value = self._given.get(key, self._defaults.get(key))
        return float(value) if isinstance(value, int | float) and not isinstance(value, bool) else None

    def text(self, key: str) -> str | None:
        """Return the text a key holds, or its default; ``None`` where there is none or it cannot be used."""
        value = self._given.get(key, self._defaults.get(key))
        return value if isinstance(value, str) else None

    def path(self, key: str) -> Path | None:
        """Return the path a key holds, joined to the folder of the site file; ``None`` where there is none."""
        text = self.text(key)
        return self.folder / text if text else None

    def pipes(self) -> list[str]:
        """Return the dotted prefixes of the pipes, ``pipes[1]`` first."""
        return self._entries("pipes")

    def zones(self) -> list[str]:
        """Return the dotted prefixes of the zones, ``zones[1]`` first."""
        return self._entries("zones")

    def _entries(self, section: str) -> list[str]:
        return [prefix for prefix in self.sections if prefix.startswith(f"{section}[")]


def _tables(section: str, raw: Any) -> dict[str, Mapping[str, Any]]:
    """Return the tables of a section by dotted prefix; nothing where they are no tables."""
    if section not in REPEATED:
        return {section: raw} if isinstance(raw, Mapping) else {}
    entries = raw if isinstance(raw, list) else []
    return {f"{section}[{n}]": entry for n, entry in enumerate(entries, start=1) if isinstance(entry, Mapping)}
