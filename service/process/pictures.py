"""Pictures of diagrams and of melting, kept: most are asked for again."""

from functools import lru_cache

from diagrams.diagram import Diagram
from diagrams.errors import InvalidInput, NotCovered, OutsideData
from diagrams.figure import draw_diagram
from diagrams.figure_style import PictureFormat
from diagrams.melting_figure import Melting, draw_melting
from service.process.caution import caution_lines
from service.process.placed import Placed, about

KEPT = 64  # pictures of about 150 kB each


def diagram_picture(
    diagram: Diagram, second_wt: float | None, temperature_c: float | None, form: PictureFormat
) -> bytes:
    """The picture of a diagram, with a point if both its values are given.

    Raises InvalidInput if only one is, OutsideData if the point lies beyond the data.
    """
    if (second_wt is None) != (temperature_c is None):
        missing = "second_wt" if second_wt is None else "temperature_c"
        raise InvalidInput(
            f"A point needs both values; {missing} is missing.",
            field=missing,
            remedy="Give second_wt and temperature_c, or neither.",
        )
    point = None
    if second_wt is not None and temperature_c is not None:
        point = (second_wt + 0.0, temperature_c + 0.0)  # −0 and 0 are one picture
    try:
        return _diagram_picture(diagram, point, form)
    except OutsideData as error:
        if error.field == "composition_wt":
            error.field = "second_wt"
        raise


@lru_cache(maxsize=KEPT)
def _diagram_picture(diagram: Diagram, point: tuple[float, float] | None, form: PictureFormat) -> bytes:
    return draw_diagram(diagram, caution_lines(diagram.elements), point, form)


@lru_cache(maxsize=KEPT)
def melting_picture(subject: Placed, target: float | None, form: PictureFormat) -> bytes:
    """The picture of an alloy's melting; OutsideData where its melting range lies beyond the data."""
    melter = subject.melter
    with about(subject):
        if melter.curve is None:
            raise NotCovered(
                f"No data cover {', '.join(subject.alloy.composition_wt)}: there is no curve to draw.",
                field="alloy",
                remedy="GET /v1/melting gives the temperatures its standard prints.",
            )
        melting = Melting(
            _name(subject),
            melter,
            melter.curve,
            melter.kept(0.0),
            melter.needed(1.0),
            None if target is None else (target, melter.needed(target)),
        )
    return draw_melting(melting, caution_lines(subject.elements, subject.process), form)


def _name(subject: Placed) -> str:
    parts = " ".join(f"{el} {wt:.6g}" for el, wt in subject.alloy.composition_wt.items())
    return f"{subject.alloy.designation} ({parts} wt%)" if subject.alloy.designation else f"{parts} wt%"
