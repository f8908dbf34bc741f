"""The long section drawn: ground, crown, suction ceiling, hydraulic grade line, water levels, marked places."""

from __future__ import annotations

from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.lines import Line2D
from matplotlib.patches import Patch

from routing.outputs.pictures import style
from routing.outputs.pictures.mapmarks import CREST, INTAKE, OUTLET, MarkLook
from routing.outputs.pictures.mapview import Entry
from routing.outputs.pictures.placing import Labels
from routing.outputs.pictures.section import Section, Spot
from routing.outputs.pictures.steps import exaggeration, multiples, places_of, round_step
from routing.outputs.pictures.style import LineLook
from routing.outputs.pictures.subject import Subject
from routing.outputs.pictures.texts import Ruler, shown
from routing.outputs.wording import figures, fixed
from routing.records import FloatArray, Scheme

#: Room for labels above and below the lines, in inches.
_ABOVE_IN, _BELOW_IN = 0.44, 0.26
#: Room for the water levels before the intake, and behind the outlet, as shares of the length.
_LEFT, _RIGHT = 0.165, 0.03
#: Where the crown pressure is least.
WORST = MarkLook("X", style.ORANGE, 6.5)
_LINES: tuple[tuple[str, str, LineLook], ...] = (
    ("ground_m", "ground", style.GROUND),
    ("grade_m", "hydraulic grade line", style.GRADE),
    ("ceiling_m", "suction ceiling", style.CEILING),
    ("crown_m", "pipe crown", style.CROWN),
)


def draw_section(axes: Axes, subject: Subject, section: Section, scheme: Scheme, labels: Labels) -> list[Entry]:
    """Draw a long section into axes whose limits are set; return its lines of the legend."""
    s, floor = section.chainage_m, axes.get_ylim()[0]
    axes.fill_between(s, section.ground_m, floor, color="#EBE3DA", linewidth=0, zorder=2)
    entries = [Entry(Patch(facecolor="#EBE3DA", edgecolor=style.GROUND.colour, linewidth=1.0), "ground")]
    for name, text, look in _LINES:
        line: FloatArray = getattr(section, name)
        axes.plot(s, line, color=look.colour, linestyle=look.style, linewidth=look.width, zorder=5)
        labels.avoid(s, line)
        if name != "ground_m":
            entries.append(Entry(_handle(look), text))
    entries += _waters(axes, subject, section, labels)
    _drop(axes, section)
    entries += _places(axes, section, scheme, labels)
    return entries


def set_limits(axes: Axes, subject: Subject, section: Section) -> float:
    """Set the limits of the axes so that the vertical exaggeration is a round number, and return it."""
    setting = subject.plan.setting
    figure = axes.get_figure(root=True)
    place = axes.get_position()
    width_in, height_in = place.width * figure.get_figwidth(), place.height * figure.get_figheight()  # type: ignore[union-attr]
    low, high = section.range_m
    low = min(low, section.outlet_m, section.receiving_m)
    high = max(high, setting.present.water_m)
    span = max(high - low, 1e-3 * float(section.chainage_m[-1]), 0.5)
    room_in = height_in - _ABOVE_IN - _BELOW_IN
    total = float(section.chainage_m[-1])
    length = total * (1.0 + _LEFT + _RIGHT)
    times = exaggeration((length / width_in) / (span / room_in))
    scale = max(length / width_in, times * span / room_in)
    wide = 0.5 * (scale * width_in - length)
    axes.set_xlim(-_LEFT * total - wide, (1.0 + _RIGHT) * total + wide)
    spare = scale * room_in / times - span
    axes.set_ylim(low - _BELOW_IN * scale / times - 0.5 * spare, high + _ABOVE_IN * scale / times + 0.5 * spare)
    return times


def name_axes(axes: Axes, subject: Subject, ruler: Ruler) -> None:
    """Draw the axes' grid and name them, with units and datum."""
    facts = subject.plan.terrain.facts
    for axis, (low, high), most in ((axes.xaxis, axes.get_xlim(), 11.0), (axes.yaxis, axes.get_ylim(), 8.0)):
        step = round_step(high - low, most)
        at = multiples(low, high, step)
        if axis is axes.xaxis:
            at = at[at >= 0.0]
        axis.set_ticks(at, [f"{value:,.{places_of(step)}f}".replace("-", "−") for value in at])
    axes.tick_params(labelsize=style.SMALL, length=2.5, width=0.5, pad=2)
    axes.grid(color=style.BLACK, alpha=0.16, linewidth=0.35, zorder=1)
    axes.set_axisbelow(True)
    axes.set_xlabel("Chainage along the pipe from the intake, m", fontsize=style.TEXT, labelpad=2)
    figure = axes.get_figure(root=True)
    height_in = axes.get_position().height * figure.get_figheight()  # type: ignore[union-attr]
    datum = ruler.shortened(f"datum: {facts.vertical_datum or 'not stated'}", style.SMALL, height_in)
    axes.set_ylabel(f"Level, m\n{datum}", fontsize=style.SMALL, labelpad=3)


def _drop(axes: Axes, section: Section) -> None:
    """Draw what the outlet's valve and exit use up: the grade line falls to the receiving level there."""
    end, low = float(section.chainage_m[-1]), section.receiving_m
    axes.plot([end, end], [section.grade_m[-1], low], color=style.BLUE, linestyle=":", linewidth=1.2, zorder=4.5)


def _handle(look: LineLook) -> Line2D:
    return Line2D([], [], color=look.colour, linestyle=look.style, linewidth=look.width)


def _waters(axes: Axes, subject: Subject, section: Section, labels: Labels) -> list[Entry]:
    setting = subject.plan.setting
    present, lowest = setting.present.water_m, setting.lowest.water_m
    left = -0.16 * float(section.chainage_m[-1])
    levels = [(lowest, f"lowest level {fixed(lowest, 2)} m", style.LOWEST, section.wet_lowest)]
    if abs(present - lowest) > 0.005:
        levels.append((present, f"present level {fixed(present, 2)} m", style.PRESENT, section.wet_present))
    else:
        levels = [(lowest, f"present and lowest\nlevel {fixed(lowest, 2)} m", style.PRESENT, section.wet_present)]
    entries = []
    for level, text, look, wet in reversed(levels):
        line = np.where(wet, level, np.nan)
        axes.plot(section.chainage_m, line, color=look.colour, linestyle=look.style, linewidth=look.width, zorder=4)
        axes.plot([left, 0.0], [level, level], color=look.colour, linestyle=look.style, linewidth=look.width, zorder=4)
        axes.fill_between(
            section.chainage_m, section.ground_m, level, where=wet, color=style.SKY, alpha=0.3, linewidth=0, zorder=1.5
        )
        labels.avoid(np.array([left, 0.0]), np.array([level, level]))
        labels.place(
            text, left, level, color=style.BLUE, sides=((1, -1), (1, 1)) if level < present else ((1, 1), (1, -1))
        )
        name = text.replace("\n", " ").rpartition(" level")[0]
        entries.append(Entry(_handle(look), f"water at the {name} level"))
    tail = setting.lowest.tailwater_m
    if tail is not None:
        right = min(axes.get_xlim()[1], 1.03 * section.chainage_m[-1])
        axes.plot([0.95 * section.chainage_m[-1], right], [tail, tail], color=style.SKY, linewidth=1.4, zorder=4)
        labels.place(f"tailwater {fixed(tail, 2)} m", section.chainage_m[-1], tail, color=style.BLUE)
        entries.append(Entry(Line2D([], [], color=style.SKY, linewidth=1.4), "tailwater"))
    return entries


def _places(axes: Axes, section: Section, scheme: Scheme, labels: Labels) -> list[Entry]:
    """Mark and name crest, lowest pressure, ends and crossing."""
    run = scheme.appraisal.duty
    end = Spot(float(section.chainage_m[-1]), section.outlet_m)
    mouth = section.mouth_m
    start = Spot(0.0, float(section.crown_m[0]) if mouth is None else mouth)
    crest = f"crest: crown {fixed(section.crest.level_m, 2)} m,\n{fixed(run.lift_m, 2)} m above the lowest level"
    at_crest = crest.replace("\n", " ") + ";"
    together = section.crest == section.lowest_pressure
    spots: list[tuple[Spot, MarkLook, str, str]] = [
        (section.lowest_pressure, WORST, pressure_text(scheme, section), "lowest crown pressure"),
        *([] if together else [(section.crest, CREST, crest, "crest (highest crown)")]),
        (end, OUTLET, f"outlet axis {fixed(end.level_m, 2)} m", "outlet"),
        (start, INTAKE, "intake" if mouth is None else f"intake mouth {fixed(mouth, 2)} m", "intake"),
    ]
    entries = []
    for spot, look, _, legend in spots:
        mark: dict[str, Any] = {"marker": look.marker, "markersize": look.size, "markerfacecolor": look.fill}
        mark |= {"markeredgecolor": style.BLACK, "markeredgewidth": 0.9, "linestyle": "none"}
        # Crest and lowest pressure may be close: the smaller mark goes on top.
        axes.plot(spot.chainage_m, spot.level_m, zorder=9 + (look is WORST), clip_on=False, **mark)
        labels.avoid_mark(spot.chainage_m, spot.level_m, look.size + 1.0)
        entries.append(Entry(Line2D([], [], **mark), legend))
    for spot, _, text, _ in spots:
        whole = f"{at_crest}\n{text}" if together and spot is section.lowest_pressure else text
        labels.place(whole, spot.chainage_m, spot.level_m)
    if section.crossing_m is not None:
        entries.append(_crossing(axes, section.crossing_m, scheme, labels))
    return entries


def pressure_text(scheme: Scheme, section: Section) -> str:
    """Return the lowest crown pressure, and what is left above the reserve or missing to it."""
    appraisal = scheme.appraisal
    at = int(np.argmin(np.abs(scheme.route.chainage_m - section.lowest_pressure.chainage_m)))
    pressure = figures(1e-3 * float(appraisal.crown_pressure_pa[at]))
    left = appraisal.reserve_left_m
    saying = f"reserve left {fixed(left, 2)} m" if left >= 0.0 else f"{fixed(-left, 2)} m of reserve missing"
    return f"lowest crown pressure {pressure} kPa absolute,\n{saying}"


def _crossing(axes: Axes, chainage_m: float, scheme: Scheme, labels: Labels) -> Entry:
    axes.axvline(chainage_m, color=style.BLACK, linestyle=":", linewidth=0.9, zorder=3)
    low, high = axes.get_ylim()
    labels.place(f"crossing {shown(scheme.route.crossing)}", chainage_m, low + 0.06 * (high - low))
    return Entry(Line2D([], [], color=style.BLACK, linestyle=":", linewidth=0.9), "crossing of the divide")
