"""One page: title, map, legend, governing figures, long section, cautions."""

from __future__ import annotations

from collections.abc import Sequence

from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg, RendererAgg
from matplotlib.figure import Figure
from matplotlib.legend import Legend

from routing.outputs.cautions import INVENTED_PRICES
from routing.outputs.pictures import style
from routing.outputs.pictures.contours import label_contours
from routing.outputs.pictures.framing import frame_of
from routing.outputs.pictures.governing import governing_rows, lacking_texts
from routing.outputs.pictures.mapmarks import draw_routes
from routing.outputs.pictures.mapview import Entry, draw_grid, draw_ground
from routing.outputs.pictures.placing import Labels
from routing.outputs.pictures.scale import draw_scale
from routing.outputs.pictures.section import section_of
from routing.outputs.pictures.sectionview import draw_section, name_axes, set_limits
from routing.outputs.pictures.subject import OVERVIEW, Subject
from routing.outputs.pictures.texts import Ruler
from routing.outputs.wording import headline, litres, scheme_text
from routing.records import Scheme

CAUTION = (
    "Planning figures only: local codes govern, and a licensed engineer must check the design. "
    "Drawdown can endanger a dam and its banks; warn people downstream."
)
#: Places in inches from the page's lower left: left, bottom, width, height.
MAP_IN = (0.72, 3.70, 6.80, 3.70)
SIDE_IN = (7.80, 3.30, 3.56, 4.10)
SECTION_IN = (0.86, 0.98, 10.50, 2.16)
_LINE_IN = 0.142


def draw_page(subject: Subject) -> Figure:
    """Return the picture of a subject as a figure.

    Raises
    ------
    OvercrestError
        If the records do not fit together: a fault of ours.
    """
    figure = Figure(figsize=style.PAGE_IN, dpi=style.DPI, facecolor=style.PAPER)
    renderer = FigureCanvasAgg(figure).get_renderer()  # type: ignore[no-untyped-call]
    ruler = Ruler(renderer)
    _head(figure, subject, ruler)
    entries = _map(figure, subject, renderer, ruler)
    top_in = _legend(figure, entries, renderer, ruler)
    if subject.scheme is None:
        _lacking(figure, subject, ruler)
    else:
        _table(figure, governing_rows(subject.plan, subject.scheme), top_in, ruler)
        _section(figure, subject, subject.scheme, renderer)
    _foot(figure, subject, ruler)
    return figure


def _axes(figure: Figure, place_in: tuple[float, float, float, float]) -> Axes:
    left, bottom, width, height = place_in
    across, up = style.PAGE_IN
    return figure.add_axes((left / across, bottom / up, width / across, height / up))


def _write(figure: Figure, text: str, x_in: float, y_in: float, size: float, **look: object) -> None:
    place = (x_in / style.PAGE_IN[0], y_in / style.PAGE_IN[1])
    figure.text(*place, text, fontsize=size, **({"va": "baseline", "ha": "left"} | look))  # type: ignore[arg-type]


def _head(figure: Figure, subject: Subject, ruler: Ruler) -> None:
    room = style.PAGE_IN[0] - 0.66
    title = subject.plan.site.title or "Siphon pipeline"
    if subject.name != OVERVIEW:
        title = f"{title}: route {subject.name}"
    _write(figure, ruler.shortened(title, style.TITLE, room, bold=True), 0.33, 7.90, style.TITLE, fontweight="bold")
    told = headline(subject.plan)
    if subject.name != OVERVIEW and subject.scheme is not None:
        told = f"Scheme {subject.scheme.rank} of {len(subject.plan.schemes)}: {scheme_text(subject.scheme)}. "
        told += f"Verdict {subject.scheme.verdict.grade}: {subject.scheme.verdict.reason}"
    for number, line in enumerate(ruler.wrapped(told, 7.6, room, 2)):
        _write(figure, line, 0.33, 7.70 - 0.145 * number, 7.6, color="#222222")


def _map(figure: Figure, subject: Subject, renderer: RendererAgg, ruler: Ruler) -> list[Entry]:
    axes = _axes(figure, MAP_IN)
    frame = frame_of(subject, MAP_IN[2] / MAP_IN[3])
    entries, contours = draw_ground(axes, subject, frame)
    draw_grid(axes, subject.plan.terrain.facts, frame, ruler)
    labels = Labels(axes, renderer)
    routes = draw_routes(axes, subject, frame, labels)
    if contours is not None:
        label_contours(axes, contours, labels)
    axes.set_xlim(frame.west, frame.east)
    axes.set_ylim(frame.south, frame.north)
    draw_scale(figure, subject.plan.terrain.facts, frame, (SIDE_IN[0], SIDE_IN[1] + SIDE_IN[3]), MAP_IN[2])
    return [*routes, *entries]


def _legend(figure: Figure, entries: Sequence[Entry], renderer: RendererAgg, ruler: Ruler) -> float:
    """Draw the legend of the map beside it; return where it ends, in inches from the page's bottom."""
    half = 0.5 * SIDE_IN[2] - 0.36
    top = SIDE_IN[1] + SIDE_IN[3] - 0.58
    legend = Legend(
        figure,
        [entry.handle for entry in entries],
        [ruler.shortened(entry.text, style.SMALL, half) for entry in entries],
        loc="upper left",
        bbox_to_anchor=(SIDE_IN[0] / style.PAGE_IN[0], top / style.PAGE_IN[1]),
        ncols=2,
        **_LEGEND,  # type: ignore[arg-type]
    )
    figure.add_artist(legend)
    return float(legend.get_window_extent(renderer).y0 / renderer.dpi)


_LEGEND: dict[str, object] = {
    "fontsize": style.SMALL,
    "frameon": False,
    "borderpad": 0.0,
    "borderaxespad": 0.0,
    "handlelength": 2.6,
    "handletextpad": 0.6,
    "columnspacing": 1.0,
    "labelspacing": 0.45,
}


def _table(figure: Figure, rows: list[tuple[str, str]], top_in: float, ruler: Ruler) -> None:
    """Write the governing figures below the legend, as many lines as there is room for."""
    left, room = SIDE_IN[0], SIDE_IN[2] - 1.08
    y = top_in - 0.22
    for number, (name, value) in enumerate(rows):
        after = len(rows) - number - 1
        lines_left = int((y - SIDE_IN[1]) / _LINE_IN) + 1 - after
        if lines_left < 1:
            break
        size = style.TEXT
        _write(figure, name, left, y, size, color="#444444")
        for line in ruler.wrapped(value, size, room, min(lines_left, 6 if name == "Verdict" else 2)):
            _write(figure, line, left + 1.08, y, size)
            y -= _LINE_IN


def _section(figure: Figure, subject: Subject, scheme: Scheme, renderer: RendererAgg) -> None:
    axes, ruler = _axes(figure, SECTION_IN), Ruler(renderer)
    section = section_of(subject, scheme)
    times = set_limits(axes, subject, section)
    name_axes(axes, subject, ruler)
    labels = Labels(axes, renderer)
    entries = draw_section(axes, subject, section, scheme, labels)
    _section_title(figure, scheme, times, ruler)
    legend = Legend(
        figure,
        [entry.handle for entry in entries],
        [entry.text for entry in entries],
        loc="upper left",
        bbox_to_anchor=(SECTION_IN[0] / style.PAGE_IN[0], (SECTION_IN[1] - 0.40) / style.PAGE_IN[1]),
        ncols=(len(entries) + 1) // 2,
        **_LEGEND,  # type: ignore[arg-type]
    )
    figure.add_artist(legend)


def _section_title(figure: Figure, scheme: Scheme, times: float, ruler: Ruler) -> None:
    """Name the scheme on the left and the vertical exaggeration, which must never be cut off, on the right."""
    left, top, size = SECTION_IN[0], SECTION_IN[1] + SECTION_IN[3] + 0.07, 8.0
    duty = scheme.appraisal.duty.discharge_m3s
    state = f"{litres(duty)} each pipe" if duty > 0.0 else "still water"
    stated = "no vertical exaggeration" if times == 1.0 else f"vertical exaggeration {times:g}"
    room = SECTION_IN[2] - ruler.width_in(stated, size) - 0.2
    title = ruler.shortened(f"Long section of {scheme_text(scheme)}; {state}, lowest level", size, room, bold=True)
    _write(figure, title, left, top, size, fontweight="bold")
    _write(figure, stated, left + SECTION_IN[2], top, size, ha="right")


def _lacking(figure: Figure, subject: Subject, ruler: Ruler) -> None:
    """Say in the place of the long section why there is none, for each pipe."""
    y = SECTION_IN[1] + SECTION_IN[3] + 0.07
    _write(figure, "No long section: there is no route to draw", SECTION_IN[0], y, 8.0, fontweight="bold")
    for text in lacking_texts(subject.plan):
        for line in ruler.wrapped(text, 7.6, SECTION_IN[2], 3):
            y -= 0.16
            if y < SECTION_IN[1] - 0.6:
                return
            _write(figure, line, SECTION_IN[0], y, 7.6)
        y -= 0.05


def _foot(figure: Figure, subject: Subject, ruler: Ruler) -> None:
    text = CAUTION
    if subject.plan.site.prices.invented:
        text = f"{INVENTED_PRICES} {text}"
    _write(
        figure, ruler.shortened(text, style.SMALL, style.PAGE_IN[0] - 0.66), 0.33, 0.14, style.SMALL, color="#333333"
    )
