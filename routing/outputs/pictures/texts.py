"""Text on a page: cleaned, measured, wrapped and shortened to the room that there is."""

from __future__ import annotations

import unicodedata

from matplotlib.backends.backend_agg import RendererAgg
from matplotlib.font_manager import FontProperties

_ELLIPSIS = "…"
#: Control characters, lone surrogates and unassigned characters: no XML file may hold them, and no font shows them.
_UNSHOWN = {"Cc", "Cs", "Cn", "Co"}


def shown(text: str) -> str:
    """Return a text on one line, without what cannot be shown."""
    kept = "".join(" " if unicodedata.category(letter) in _UNSHOWN else letter for letter in text)
    return " ".join(kept.split())


class Ruler:
    """Measures text in inches."""

    def __init__(self, renderer: RendererAgg) -> None:
        self._renderer = renderer
        self._known: dict[tuple[str, float, bool], float] = {}

    def width_in(self, text: str, size: float, *, bold: bool = False) -> float:
        """Return the width of a line of text in inches, a little more where letters move together (kerning)."""
        return sum(self._letter_in(letter, size, bold=bold) for letter in text)

    def _letter_in(self, letter: str, size: float, *, bold: bool) -> float:
        key = (letter, size, bold)
        if key not in self._known:
            font = FontProperties(size=size, weight="bold" if bold else "normal", family=["DejaVu Sans"])
            # Between two others, a letter's own bearings count, and blanks too.
            line, less = (self._measured(text, font) for text in (f"n{letter}n", "nn"))
            self._known[key] = (line - less) / self._renderer.dpi
        return self._known[key]

    def _measured(self, text: str, font: FontProperties) -> float:
        measured = self._renderer.get_text_width_height_descent(text, font, ismath=False)  # type: ignore[no-untyped-call]
        return float(measured[0])

    def shortened(self, text: str, size: float, room_in: float, *, bold: bool = False) -> str:
        """Return the text, cut with an ellipsis where it is longer than the room."""
        text = shown(text)
        if self.width_in(text, size, bold=bold) <= room_in:
            return text
        low, high = 0, len(text)
        while low < high:
            middle = (low + high + 1) // 2
            fits = self.width_in(text[:middle].rstrip() + _ELLIPSIS, size, bold=bold) <= room_in
            low, high = (middle, high) if fits else (low, middle - 1)
        return text[:low].rstrip() + _ELLIPSIS

    def wrapped(self, text: str, size: float, room_in: float, most: int) -> list[str]:
        """Return the text in at most ``most`` lines; the last is cut where it does not fit."""
        words = shown(text).split()
        lines: list[str] = []
        while words and len(lines) < most - 1:
            count = 1
            while count < len(words) and self.width_in(" ".join(words[: count + 1]), size) <= room_in:
                count += 1
            lines.append(self.shortened(" ".join(words[:count]), size, room_in))
            words = words[count:]
        return [*lines, self.shortened(" ".join(words), size, room_in)] if words else lines
