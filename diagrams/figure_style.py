"""How pictures look and how they become bytes: colours, words, measured text. Lengths are points, 1/72 inch.

The drawing library is imported on first use: it takes half a second, and most questions need no picture.
"""

import io
import re
import warnings
from collections.abc import Iterator
from contextlib import contextmanager
from functools import cache, lru_cache
from importlib import import_module
from threading import Lock
from typing import TYPE_CHECKING, Any, Literal

from diagrams.units import celsius_to_fahrenheit

if TYPE_CHECKING:
    from matplotlib.figure import Figure
    from matplotlib.patches import Polygon

PictureFormat = Literal["png", "svg"]
MEDIA_TYPES: dict[PictureFormat, str] = {"png": "image/png", "svg": "image/svg+xml"}
DOTS_PER_INCH = 110

INK = "#22313a"  # text and axes
FAINT = "#5d6c75"  # what is read last
BORDER = "#2f4a58"
COMPOUND = "#6a3d7c"
INVARIANT = "#0b6a6f"
MARK = "#b5123e"  # the point asked about
CAUTION = "#8a3b00"
CAUTION_PAPER = "#fff4e3"
# What a field holds, hottest colour for all liquid: its colour and its words in the key.
FIELDS = {
    "liquid": ("#fbc98a", "liquid"),
    "liquid liquid": ("#fcd9ac", "two liquids"),
    "liquid solid": ("#fdf0d8", "liquid and solid"),
    "solid": ("#c5d8df", "one solid"),
    "solid solid": ("#e4edf0", "two solids"),
}
_GREEK = {"alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "epsilon": "ε", "zeta": "ζ", "eta": "η"}
_SUBSCRIPTS = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
_FAMILY = "DejaVu Sans"  # comes with the drawing library, so that pictures look alike everywhere
_MEASURED_AT = 100.0
_drawing = Lock()  # the library keeps fonts and settings in common


def shown(text: str) -> str:
    """Phase names as pictures print them: Greek letters, subscripts, an arrow in a reaction."""
    for word, letter in _GREEK.items():
        text = re.sub(rf"\b{word}\b", letter, text)
    text = re.sub(r"(?<=[A-Za-z])[0-9]+", lambda found: found[0].translate(_SUBSCRIPTS), text)
    return text.replace(" -> ", " → ").replace("'", "′")


def both_scales(temperature_c: float) -> str:
    """A temperature for people: °C, and °F in brackets."""
    return f"{temperature_c:.1f} °C ({celsius_to_fahrenheit(temperature_c):.0f} °F)"


def percent_of_mass(fraction: float) -> str:
    """A liquid fraction in words."""
    if fraction >= 1.0:
        return "all liquid"
    if fraction <= 0.0:
        return "all solid"
    return f"{100.0 * fraction:.1f} % of the mass is liquid"


@contextmanager
def _any_script() -> Iterator[None]:
    """A script that the font lacks is drawn as boxes, without a warning; in an SVG it stays text."""
    with warnings.catch_warnings():
        warnings.filterwarnings("ignore", message="Glyph .* missing from font")
        yield


@cache
def _library() -> Any:
    """The drawing library, with our settings instead of those of the machine."""
    library = import_module("matplotlib")
    library.rcdefaults()
    library.rcParams.update(
        {
            "svg.hashsalt": "meltband",  # the same picture gives the same bytes
            "svg.fonttype": "none",  # text stays text: it can be searched, read aloud and copied
            "font.family": [_FAMILY, "sans-serif"],
            "font.sans-serif": [_FAMILY],
            "text.hinting": "none",  # letters keep their true widths, on screens and on paper alike
            "text.color": INK,
            "text.parse_math": False,
            "axes.edgecolor": INK,
            "axes.labelcolor": INK,
            "xtick.color": INK,
            "ytick.color": INK,
        }
    )
    return library


def new_figure(width: float, height: float) -> "Figure":
    """An empty sheet of this size."""
    _library()
    figure: Figure = import_module("matplotlib.figure").Figure(
        figsize=(width / 72.0, height / 72.0), dpi=DOTS_PER_INCH, facecolor="white"
    )
    return figure


def patch(corners: list[list[float]], paper: str, edge: str = "none", line: float = 0.6) -> "Polygon":
    """A filled polygon."""
    filled: Polygon = import_module("matplotlib.patches").Polygon(
        corners, closed=True, facecolor=paper, edgecolor=edge, linewidth=line
    )
    return filled


def to_bytes(figure: "Figure", form: PictureFormat, title: str) -> bytes:
    """The finished picture with its title for screen readers; the same figure gives the same bytes."""
    sheet = io.BytesIO()
    metadata = {"Title": title, **({"Date": None, "Creator": None} if form == "svg" else {"Software": None})}
    with _drawing, _any_script():
        figure.savefig(sheet, format=form, metadata=metadata)
    return sheet.getvalue()


@lru_cache(maxsize=8192)
def text_width(text: str, size: float, bold: bool = False) -> float:
    """Width of one line of text, in points."""
    _library()
    fonts = import_module("matplotlib.font_manager")
    weight = "bold" if bold else "normal"
    with _drawing, _any_script():
        font = fonts.get_font(fonts.findfont(fonts.FontProperties(family=_FAMILY, weight=weight)))
        font.set_size(_MEASURED_AT, 72)
        font.set_text(text, 0.0, flags=import_module("matplotlib.ft2font").LoadFlags.NO_HINTING)
        width: float = font.get_width_height()[0] / 64.0 * size / _MEASURED_AT
    return width


def wrapped(text: str, size: float, width: float, bold: bool = False) -> list[str]:
    """Text broken at spaces into lines no wider than `width` points; a single long word may be wider."""
    lines: list[str] = []
    for word in text.split():
        longer = f"{lines[-1]} {word}" if lines else word
        if lines and text_width(longer, size, bold) <= width:
            lines[-1] = longer
        else:
            lines.append(word)
    return lines
