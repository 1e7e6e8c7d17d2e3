"""Reads a picture back: its texts and the room they take, measured apart from the code that laid them out."""

import re
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from xml.etree import ElementTree

import matplotlib
import shapely
from PIL import ImageFont

SVG = "{http://www.w3.org/2000/svg}"
RISE, FALL = 0.73, 0.02  # of a letter over and under its base line, in letter sizes: capitals, most letters


@dataclass(frozen=True)
class Text:
    """One text of an SVG: what it says, its box in points (downwards), and its colour."""

    words: str
    box: shapely.Polygon
    colour: str


@cache
def _font(bold: bool) -> ImageFont.FreeTypeFont:
    name = "DejaVuSans-Bold.ttf" if bold else "DejaVuSans.ttf"
    return ImageFont.truetype(str(Path(matplotlib.get_data_path(), "fonts", "ttf", name)), 200)


def read_svg(picture: bytes) -> tuple[tuple[float, float], list[Text]]:
    """Width and height in points, and all texts."""
    root = ElementTree.fromstring(picture)
    assert root.tag == f"{SVG}svg"
    size = float(root.get("width", "").removesuffix("pt")), float(root.get("height", "").removesuffix("pt"))
    return size, [_text(element) for element in root.iter(f"{SVG}text")]


def _text(element: ElementTree.Element) -> Text:
    style = dict(part.strip().split(": ", 1) for part in element.get("style", "").split(";"))
    words = "".join(element.itertext())
    em = float(re.search(r"([0-9.]+)px", element.get("style", ""))[1])  # type: ignore[index]  # always there
    width = _font("bold" in element.get("style", "")).getlength(words) / 200.0 * em
    anchor = {"start": 0.0, "middle": -width / 2, "end": -width}[style.get("text-anchor", "start")]
    turn = re.fullmatch(
        r"(?:translate\(([-0-9.]+) ([-0-9.]+)\) )?rotate\(([-0-9.]+)(?: ([-0-9.]+) ([-0-9.]+))?\)",
        element.get("transform", "rotate(0 0 0)"),
    )
    assert turn is not None, element.get("transform")
    x, y = float(element.get("x") or turn[1] or turn[4]), float(element.get("y") or turn[2] or turn[5])
    box = shapely.box(x + anchor, y - RISE * em, x + anchor + width, y + FALL * em)
    if float(turn[3]) == -90.0:
        left, low = x - RISE * em, y - anchor
        box = shapely.box(left, low - width, left + (RISE + FALL) * em, low)
    return Text(words, box, style["fill"])
