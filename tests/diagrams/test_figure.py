"""Pictures: the same bytes each time, complete, legible, and true to the diagram."""

import os
import re
import struct
import subprocess
import sys
from functools import cache
from hashlib import sha256
from io import BytesIO

import numpy as np
import pytest
import shapely
from PIL import Image

from diagrams.errors import OutsideData
from diagrams.figure import draw_diagram
from diagrams.figure_scales import even
from diagrams.figure_sheet import LEFT, PLOT_WIDTH, WIDTH
from diagrams.figure_style import DOTS_PER_INCH, MARK, shown, wrapped
from diagrams.files.catalog import catalog
from diagrams.files.store import stored_ids
from diagrams.melting_figure import Melting, draw_melting
from tests.diagrams.picture import read_svg
from tests.diagrams.tolerant import tolerant

CAUTION = ("Local rules and licensed practice decide.", "Fume: extract it. Lead: wash hands.")
DOT = DOTS_PER_INCH / 72.0


@cache
def svg_of(diagram_id: str) -> bytes:
    return draw_diagram(catalog().get(diagram_id), CAUTION, form="svg")


def said(picture: bytes) -> str:
    return " ".join(text.words for text in read_svg(picture)[1])


def melting(wt: float, target: float | None = None) -> Melting:
    melter = tolerant("pb-sn", wt, wt - 0.5, wt + 0.5)
    return Melting(
        f"Sn {wt:g}",
        catalog().get("pb-sn"),
        melter.curve,
        melter.kept(0.0),
        melter.needed(1.0),
        None if target is None else (target, melter.needed(target)),
    )


@pytest.mark.parametrize("form", ["png", "svg"])
def test_the_same_picture_has_the_same_bytes(form: str) -> None:
    diagram = catalog().get("cu-sn")
    first = draw_diagram(diagram, CAUTION, (97.0, 300.0), form)
    assert draw_diagram(diagram, CAUTION, (97.0, 300.0), form) == first
    assert draw_diagram(diagram, CAUTION, (97.0, 301.0), form) != first
    curve = draw_melting(melting(60.0), CAUTION, form)
    assert draw_melting(melting(60.0), CAUTION, form) == curve


def test_another_process_draws_the_same_bytes() -> None:
    program = (
        "import sys, hashlib\n"
        "from diagrams.files.catalog import catalog\n"
        "assert 'matplotlib' not in sys.modules\n"
        "from diagrams.figure import draw_diagram\n"
        "assert 'matplotlib' not in sys.modules\n"
        f"for form in ('png', 'svg'):\n"
        f"    picture = draw_diagram(catalog().get('ag-cu'), {CAUTION!r}, (20.0, 800.0), form)\n"
        "    print(hashlib.sha256(picture).hexdigest())\n"
    )
    environment = {**os.environ, "PYTHONHASHSEED": "12345", "TZ": "Pacific/Auckland"}
    command = [sys.executable, "-c", program]
    told = subprocess.run(command, env=environment, capture_output=True, text=True, check=True).stdout.split()
    here = [draw_diagram(catalog().get("ag-cu"), CAUTION, (20.0, 800.0), form) for form in ("png", "svg")]
    assert told == [sha256(picture).hexdigest() for picture in here]


def test_png_has_the_promised_size_and_no_clock() -> None:
    picture = draw_diagram(catalog().get("pb-sn"), CAUTION)
    assert picture[:8] == b"\x89PNG\r\n\x1a\n"
    width, height = struct.unpack(">II", picture[16:24])
    assert width == int(WIDTH * DOT)
    assert 0.5 * width < height < 1.5 * width
    image = Image.open(BytesIO(picture))
    assert set(image.info) <= {"Title", "dpi"}
    assert image.info["Title"].startswith("Pb–Sn")


@pytest.mark.parametrize("diagram_id", stored_ids())
def test_every_picture_says_what_it_shows_and_no_words_collide(diagram_id: str) -> None:
    diagram = catalog().get(diagram_id)
    (width, height), texts = read_svg(svg_of(diagram_id))
    words = " ".join(text.words for text in texts)
    for region in diagram.regions:
        assert shown(region.name) in words
    for compound in diagram.compounds:
        assert shown(compound.name) in words
    for invariant in diagram.invariants:
        assert f"{invariant.temperature_c:.1f} °C (" in words
    for source in diagram.sources:
        assert source.text.rstrip(".") in words
        assert source.how in words
    assert all(note in words for note in diagram.notes)
    assert all(caution in words for caution in CAUTION)
    assert diagram.edition in words
    assert all(scale in words for scale in ("wt% ", "at% ", "temperature, °C", "temperature, °F"))
    sheet = shapely.box(3, 3, width - 3, height - 3)
    for text in texts:
        assert sheet.contains(text.box), text.words
    boxes = [text.box for text in texts]
    for i, j in shapely.STRtree(boxes).query(boxes, "intersects").T.tolist():
        assert i == j or boxes[i].intersection(boxes[j]).area < 0.5, (texts[i].words, texts[j].words)


@pytest.mark.parametrize("diagram_id", stored_ids())
def test_names_without_a_pointer_stand_in_their_field(diagram_id: str) -> None:
    diagram = catalog().get(diagram_id)
    (west, east), (south, north) = diagram.composition_range_wt, diagram.temperature_range_c
    _, texts = read_svg(svg_of(diagram_id))
    marks = {}  # °C by height on the sheet, from the numbers on the left
    for text in texts:
        if re.fullmatch(r"[0-9]+", text.words) and text.box.bounds[2] < LEFT and text.box.bounds[0] > 20:
            marks[float(text.words)] = 0.5 * (text.box.bounds[1] + text.box.bounds[3])
    (t1, y1), *_, (t2, y2) = sorted(marks.items())
    biggest = max(diagram.regions, key=lambda r: r.polygon.area)
    spots = []
    for text in texts:
        x, y = text.box.centroid.coords[0]
        wt = west + (x - LEFT) / PLOT_WIDTH * (east - west)
        celsius = t1 + (y - y1) / (y2 - y1) * (t2 - t1)
        if text.words == shown(biggest.name) and west < wt < east and south < celsius < north:
            spots.append(shapely.Point(wt, celsius))
    assert any(biggest.polygon.contains(spot) for spot in spots)


def test_the_marked_point_has_its_tie_line_and_its_amounts_in_words() -> None:
    diagram = catalog().get("pb-sn")
    wt, temperature_c = 40.0, 200.0
    field = next(r for r in diagram.regions if r.name == "L + (Pb)").polygon
    level = shapely.LineString([(0, temperature_c), (100, temperature_c)])
    left, _, right, _ = field.intersection(level).bounds
    liquid = (wt - left) / (right - left)
    words = said(draw_diagram(diagram, CAUTION, (wt, temperature_c), "svg"))
    assert "40 wt% Sn at 200.0 °C (392 °F)" in words
    assert f"{100 * liquid:.1f} % of the mass is liquid" in words
    assert f"L: {100 * liquid:.1f} % of the mass, {right:.2f} wt% Sn" in words
    assert f"(Pb): {100 * (1 - liquid):.1f} % of the mass, {left:.2f} wt% Sn" in words
    assert "of the mass is liquid" not in said(draw_diagram(diagram, CAUTION, form="svg"))

    image = np.asarray(
        Image.open(BytesIO(draw_diagram(diagram, CAUTION, (wt, temperature_c)))).convert("RGB")
    )
    colour = [int(MARK[k : k + 2], 16) for k in (1, 3, 5)]
    in_plot = image[:, : int((LEFT + PLOT_WIDTH) * DOT)]
    columns = np.flatnonzero((in_plot == colour).all(axis=2).any(axis=0))
    ends = (np.array([columns[0], columns[-1]]) / DOT - LEFT) / PLOT_WIDTH * 100.0
    assert ends == pytest.approx([left, right], abs=1.0)  # the dots at the ends are 1 wt% wide


def test_words_for_all_liquid_all_solid_and_an_invariant() -> None:
    diagram = catalog().get("pb-sn")
    assert "all liquid" in said(draw_diagram(diagram, CAUTION, (61.9, 300.0), "svg"))
    assert "all solid" in said(draw_diagram(diagram, CAUTION, (61.9, 100.0), "svg"))
    eutectic = next(i for i in diagram.invariants if i.kind == "eutectic")
    words = said(draw_diagram(diagram, CAUTION, (40.0, eutectic.temperature_c), "svg"))
    assert "Just above: L + (Pb)" in words
    assert "Just below: (Pb) + (Sn)" in words


def test_a_point_beyond_the_data_is_refused() -> None:
    with pytest.raises(OutsideData):
        draw_diagram(catalog().get("pb-sn"), CAUTION, (40.0, 500.0))


def test_a_tie_line_that_leaves_the_frame_says_so() -> None:
    words = said(draw_diagram(catalog().get("sb-sn"), CAUTION, (85.0, 246.0), "svg"))
    assert "59.39 wt% Sn (beyond the picture)" in " ".join(words.split())


def test_greek_subscripts_and_arrows_are_for_pictures_only() -> None:
    assert shown("L + beta") == "L + β"
    assert shown("gamma + epsilon") == "γ + ε"
    assert shown("Cu6Sn5' + (Sn)") == "Cu₆Sn₅′ + (Sn)"
    assert shown("L1 -> (Cu) + L2") == "L₁ → (Cu) + L₂"
    assert shown("alphabet") == "alphabet"
    assert {r.name for r in catalog().get("cu-zn").regions} >= {"beta", "L + gamma"}


def test_melting_picture_gives_range_target_and_jump() -> None:
    drawn = melting(60.0, 0.97)
    (width, height), texts = read_svg(draw_melting(drawn, CAUTION, "svg"))
    words = " ".join(text.words for text in texts)
    diagram = drawn.origin
    eutectic = next(i for i in diagram.invariants if i.kind == "eutectic")
    left, right = eutectic.compositions_wt["(Pb)"], eutectic.compositions_wt["L"]
    jump = (60.0 - left) / (right - left)
    assert f"solidus {eutectic.temperature_c:.1f} °C" in words
    assert f"from 0.0 to {100 * jump:.1f} % liquid" in words
    liquid = next(r for r in diagram.regions if r.name == "L").polygon
    liquidus_c = liquid.intersection(shapely.LineString([(60, 0), (60, 1000)])).bounds[1]
    assert f"liquidus {liquidus_c:.1f} °C" in words
    assert "97 % liquid from" in words
    assert all(caution in words for caution in CAUTION)
    sheet = shapely.box(3, 3, width - 3, height - 3)
    assert all(sheet.contains(text.box) for text in texts)


@pytest.mark.parametrize(
    ("low", "high", "most", "expected"),
    [
        (0.0, 100.0, 11, [0, 10, 20, 30, 40, 50, 60, 70, 80, 90, 100]),
        (75.0, 100.0, 11, [75, 80, 85, 90, 95, 100]),
        (25.0, 420.0, 12, [50, 100, 150, 200, 250, 300, 350, 400]),
        (0.0, 13.98, 11, [0, 2, 4, 6, 8, 10, 12]),
    ],
)
def test_scales_have_round_numbers(low: float, high: float, most: int, expected: list[float]) -> None:
    assert even(low, high, most) == expected


def test_text_is_broken_without_losing_a_word() -> None:
    text = "Lead harms nerves, kidneys, blood and reproduction, and mostly enters by the mouth."
    for room in (60.0, 120.0, 240.0, 1000.0):
        assert " ".join(wrapped(text, 7.0, room)) == text
    assert len(wrapped(text, 7.0, 1000.0)) == 1
    assert len(wrapped(text, 7.0, 120.0)) > 2
