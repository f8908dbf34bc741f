"""Pictures as files: PNG and SVG, with a text alternative inside, the same bytes for the same plan."""

from __future__ import annotations

import io
from collections.abc import Iterator
from xml.sax.saxutils import escape

from routing.outputs.pictures import style
from routing.outputs.pictures.page import draw_page
from routing.outputs.pictures.quiet import quietly
from routing.outputs.pictures.subject import Subject, Wanted, overview, single_routes
from routing.outputs.pictures.texts import shown
from routing.outputs.pictures.words import picture_text, picture_title, pictures_text
from routing.records import Plan

#: Of nine: the higher ones take long and gain little.
_COMPRESSION = 4


def picture_files(plan: Plan, wanted: Wanted = "overview") -> Iterator[tuple[str, bytes]]:
    """Draw the pictures of a plan.

    Parameters
    ----------
    plan
        What to draw.
    wanted
        ``"overview"``: the whole plan with its best scheme; ``"all"``: besides, each route by itself with the best
        scheme on it; ``"none"``: nothing.

    Yields
    ------
    (str, bytes)
        Name and content of each file: a PNG and an SVG each, then ``pictures.txt``, which says what they show.

    Raises
    ------
    OvercrestError
        If the records do not fit together: a fault of ours.
    """
    if wanted == "none":
        return
    subjects = [overview(plan), *(single_routes(plan) if wanted == "all" else [])]
    for subject in subjects:
        png, svg = picture(subject)
        yield f"{subject.name}.png", png
        yield f"{subject.name}.svg", svg
    yield "pictures.txt", pictures_text(subjects).encode("utf-8", "backslashreplace")


def picture(subject: Subject) -> tuple[bytes, bytes]:
    """Return one picture as PNG and as SVG.

    Raises
    ------
    OvercrestError
        If the records do not fit together: a fault of ours.
    """
    title, text = shown(picture_title(subject)), shown(picture_text(subject))
    with quietly(), style.our_settings():
        figure = draw_page(subject)
        png, svg = io.BytesIO(), io.BytesIO()
        # tEXt chunks are Latin-1, so what is outside it is written as an escape.
        told = {name: _latin(value) for name, value in (("Title", title), ("Description", text))}
        quick = {"compress_level": _COMPRESSION}
        figure.savefig(png, format="png", metadata={"Software": "overcrest", **told}, pil_kwargs=quick)
        figure.savefig(svg, format="svg", dpi=style.SVG_IMAGE_DPI, metadata={"Date": None, "Title": title})
    return png.getvalue(), _described(svg.getvalue(), text)


def _latin(text: str) -> str:
    return text.encode("latin-1", "backslashreplace").decode("latin-1")


def _described(svg: bytes, text: str) -> bytes:
    """Put the text alternative after the title of an SVG, and say that the whole is one image."""
    head, mark, rest = svg.decode("utf-8").partition("</title>")
    head = head.replace("<svg ", '<svg role="img" aria-labelledby="picture-title picture-text" ', 1)
    head = head.replace("<title>", '<title id="picture-title">', 1)
    return f'{head}{mark}\n <desc id="picture-text">{escape(text)}</desc>{rest}'.encode()
