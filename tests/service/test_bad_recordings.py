"""Broken recordings: answered in order, never mended unasked, as a table no otherwise than as JSON."""

import copy
import json
from dataclasses import dataclass, replace
from typing import Any

import pytest
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st

from service.problems import MEDIA_TYPE
from service.routes.profiles import EXAMPLES, TABLE_EXAMPLE
from service.schemas.profile_words import MOST_SENSORS, REPAIRS
from tests.conftest import Ask

Json = dict[str, Any]
WINDOW: Json = {"minimum_peak_c": 200, "maximum_peak_c": 240}
EVERYTHING: Json = {"repairs": ",".join(REPAIRS)}
RUN: Json = EXAMPLES["reflow"]["value"]
PLAIN = TABLE_EXAMPLE.partition("\n")[2]
NAMES = ["a", "U7 corner", "Größe", "über, links", 'the "hot" one', "No. 12", "x" * 100]
ODD: list[Any] = [1e308, -1e308, 5e-324, 1e16, -0.0, float("nan"), float("inf"), 10**300, 2**63, "24", ""]
ODD += [None, True, "\ud800", "\x00", [], {}, 0, -1, [None], [[1]], {"at_least": 1e-320}]
WORDS = ["NaN", "inf", "warm", "24°C", "0x18", "1_0", "1 0", "--1", "1e", "1.2.3", "N/A", "12:00"]
WAYS = [(d, s, quoted) for d in ".," for s in ",;\t" for quoted in (False, True) if quoted or d != s]
MARKS = "0123456789.,;\t\n\r\"'#?eE+-: aµ\u2028\x00\ufeff"
wild = settings(max_examples=150, phases=[Phase.explicit, Phase.generate])  # no need to whittle junk down
tame = settings(max_examples=40, suppress_health_check=[HealthCheck.too_slow])


@dataclass
class Column:
    """A sensor as recorded, what mending by hand leaves of it (None: nothing), and the repair that is due."""

    name: str
    time_s: list[float]
    temperature_c: list[Any]  # float, or None for a missing sample
    mended: tuple[list[float], list[Any]] | None
    repair: str = ""
    count: int = 0

    def picked(self, order: list[int]) -> tuple[list[float], list[Any]]:
        return [self.time_s[k] for k in order], [self.temperature_c[k] for k in order]


def send(ask: Ask, sent: Json | str | bytes, status: int | None = None, **more: str) -> Json:
    """The answer, if it is a verdict or a problem that says what is wrong, where, and what to do."""
    kind, raw, params = "text/csv", sent, {"alloy": "Sn63Pb37"} | WINDOW | more
    if isinstance(sent, dict):
        kind, raw, params = "application/json", json.dumps(sent), {}
    answer = ask("POST", "/v1/profile-checks", content=raw, headers={"content-type": kind}, params=params)
    assert status in (None, answer.status_code), answer.text
    body: Json = json.loads(answer.text, parse_constant=pytest.fail)
    assert body["safety"]["notes"]
    if answer.status_code == 200:
        assert body["verdict"] in ("pass", "fail")
        return body
    assert 400 <= answer.status_code < 500, answer.text
    assert answer.headers["content-type"].partition(";")[0] == MEDIA_TYPE
    assert min(len(error[part]) for error in body["errors"] for part in ("field", "detail", "remedy")) > 0
    return {"errors": body["errors"]}  # what else there is differs from call to call


@st.composite
def sound_runs(draw: st.DrawFn, least: int = 1) -> list[Column]:
    """Sensors that rise and fall strictly, on common times: no stretch is stuck, no pause is a gap."""
    n = draw(st.integers(6, 10))
    some = st.lists(st.integers(1, 9), min_size=n - 1, max_size=n - 1)
    steps, top, columns = draw(some), draw(st.integers(2, n - 2)), []
    times = [8.0 * k + sum(steps[:k]) for k in range(n)]
    for name in draw(st.lists(st.sampled_from(NAMES), min_size=least, max_size=5, unique=True)):
        rises, start = draw(some), draw(st.integers(18, 28))
        peak, end = draw(st.integers(195, 245)), draw(st.integers(40, 80))
        up, down = sum(rises[:top]), sum(rises[top:])
        readings = [round(start + (peak - start) * sum(rises[:k]) / up, 2) for k in range(top + 1)]
        readings += [round(peak + (end - peak) * sum(rises[top:k]) / down, 2) for k in range(top + 1, n)]
        columns.append(Column(name, times, readings, (times, readings)))
    return columns


def spoilt(draw: Any, c: Column, repair: str) -> Column:
    """The sensor with the fault that this repair is for; there is no fault without a name."""
    n, count, mended, times, readings = len(c.time_s), 1, c.mended, c.time_s.copy(), c.temperature_c.copy()
    k, some = draw(st.integers(1, n - 1)), draw(st.sets(st.integers(0, n - 1), min_size=1, max_size=3))
    match repair:
        case "leave out empty sensors":
            readings, count, mended = [None] * n, n, None
        case "leave out missing samples":
            readings, count = [None if j in some else r for j, r in enumerate(readings)], len(some)
            mended = c.picked([j for j in range(n) if j not in some])
        case "sort times":
            order = draw(st.permutations(range(n)).filter(lambda o: list(o) != sorted(o)))
            (times, readings), count = c.picked(order), sum(order[j] < order[j - 1] for j in range(1, n))
        case "merge equal times":
            (times, readings), count = c.picked(sorted([*range(n), *some, min(some)])), len(some) + 1
        case "leave out jumps":  # a wire comes off for a few samples
            off, count = draw(st.sampled_from([-210, 400, 1500])), len(some)
            times[k:k] = [c.time_s[k - 1] + 0.25 * (j + 1) for j in range(count)]
            readings[k:k] = [max(c.temperature_c[k - 1] + off * 0.9**j, -199.0) for j in range(count)]
        case "bridge gaps":
            times = [t + 400.0 * (j >= k) for j, t in enumerate(times)]
            mended = times, readings
        case "leave out dead sensors":  # off the work, with some noise, or stuck after the first sample
            level, count, mended = draw(st.sampled_from([0.0, 24.0, 900.0])), n, None
            stuck, noisy = [20.0] + [readings[1]] * (n - 1), [level + j % 4 / 10 for j in range(n)]
            readings = draw(st.sampled_from([noisy, stuck]))
    return Column(c.name, times, readings, mended, repair, count)


@st.composite
def faulty_runs(draw: st.DrawFn) -> list[Column]:
    """At most one fault a sensor, so that its count is known; one sensor stays sound, one does not."""
    first, second, *others = draw(sound_runs(least=2))
    others = [spoilt(draw, c, draw(st.sampled_from([*REPAIRS, ""]))) for c in others]
    return draw(st.permutations([first, spoilt(draw, second, draw(st.sampled_from(REPAIRS))), *others]))


def asked(columns: list[Column], **more: Any) -> Json:
    sent = [{"name": c.name, "time_s": c.time_s, "temperature_c": c.temperature_c} for c in columns]
    return {"alloy": {"designation": "Sn63Pb37"}, "window": WINDOW, "sensors": sent} | more


@tame
@given(columns=sound_runs())
def test_a_sound_run_is_taken_as_it_is(ask: Ask, columns: list[Column]) -> None:
    found = send(ask, asked(columns), 200)
    assert found["repairs"] == []
    peaks = [(c.name, max(c.temperature_c)) for c in columns]
    assert [(s["name"], s["peak_c"]) for s in found["sensors"]] == peaks
    assert send(ask, asked(columns, repairs=REPAIRS), 200) == found


@tame
@given(columns=faulty_runs())
def test_faults_are_refused_or_mended_as_asked_and_told(ask: Ask, columns: list[Column]) -> None:
    due = sorted({c.repair for c in columns if c.repair})
    for allowed, lacking in [([], due), *(([r for r in REPAIRS if r != one], [one]) for one in due)]:
        error = send(ask, asked(columns, repairs=allowed), 422)["errors"][0]
        accused = columns[int(error["field"].split(".")[1])]
        assert accused.repair in lacking
        assert accused.name in error["detail"]
        assert f"“{accused.repair}”" in error["remedy"]
    found = send(ask, asked(columns, repairs=due), 200)
    told = sorted((made["sensor"], made["repair"], made["count"]) for made in found["repairs"])
    assert told == sorted((c.name, c.repair, c.count) for c in columns if c.repair)
    assert send(ask, asked(columns, repairs=REPAIRS), 200) == found
    by_hand = [Column(c.name, *c.mended, None) for c in columns if c.mended]
    assert send(ask, asked(by_hand, longest_gap_s=1e6), 200) == found | {"repairs": []}


@tame
@given(columns=faulty_runs(), data=st.data())
def test_the_order_of_sensors_decides_nothing(ask: Ask, columns: list[Column], data: st.DataObject) -> None:
    columns = [*columns, replace(columns[0], name="twin")]  # as tight as another to the last digit
    orders = [columns, data.draw(st.permutations(columns))]
    found, other = (send(ask, asked(o, limits=RUN["limits"], repairs=REPAIRS), 200) for o in orders)
    for answer in (found, other):
        answer["sensors"].sort(key=lambda s: s["name"])
        answer["repairs"].sort(key=lambda r: r["sensor"])
    assert found == other


@settings(max_examples=20)
@given(columns=sound_runs(), kelvin=st.booleans(), lost=st.lists(st.sampled_from("EF1"), min_size=5))
def test_whole_runs_beyond_repair(ask: Ask, columns: list[Column], kelvin: bool, lost: list[str]) -> None:
    for c in columns:
        c.temperature_c = [r + 273.15 if kelvin else r * 1.8 + 32.0 for r in c.temperature_c]
    error = send(ask, asked(columns, repairs=REPAIRS), 422)["errors"][0]
    assert error["field"] == "sensors"
    assert ("kelvin" if kelvin else "Fahrenheit") in error["remedy"]
    sensors = send(ask, asked(columns, readings_are_celsius=True), 200)["sensors"]
    assert [s["peak_c"] for s in sensors] == [max(c.temperature_c) for c in columns]
    for c, how in zip(columns, lost, strict=False):  # empty, flat, a single sample: none is left to judge
        head, tail = {"E": (None, None), "F": (24.0, 24.0), "1": (24.0, None)}[how]
        c.temperature_c = [head, *[tail] * (len(c.time_s) - 1)]
    assert send(ask, asked(columns, repairs=REPAIRS), 422)["errors"][0]["field"].startswith("sensors")


def rows_of(columns: list[Column], style: str = "{!r}") -> list[list[str]]:
    lines = zip(columns[0].time_s, *(c.temperature_c for c in columns), strict=True)
    told = [["" if value is None else style.format(value) for value in line] for line in lines]
    return [["time", *(c.name for c in columns)], *told]


@st.composite
def written(draw: st.DrawFn, rows: list[list[str]], way: tuple[str, str, bool]) -> tuple[str, list[int]]:
    """Rows as a text table as loggers and spreadsheets write them, and the line on which each stands."""
    (decimal, separator, quoted), pad = way, draw(st.sampled_from(["", " "]))
    lines, where = list[str](), list[int]()
    for row in [rows[0], *([cell.replace(".", decimal) for cell in row] for row in rows[1:])]:
        if draw(st.integers(0, 4)) == 0:
            lines += draw(st.lists(st.sampled_from(["", "  ", '# a note; with, a "', "#"]), max_size=2))
        marks, texts = {separator, '"'}, ['"' + cell.replace('"', '""') + '"' for cell in row]
        texts = [t if quoted or set(c) & marks else pad + c + pad for c, t in zip(row, texts, strict=True)]
        where.append(len(lines) + 1)
        lines.append(separator.join(texts))
    newline, bom = draw(st.sampled_from(["\n", "\r\n", "\r"])), draw(st.sampled_from(["", "\ufeff"]))
    return bom + newline.join(lines) + newline * draw(st.integers(0, 3)), where


@pytest.mark.parametrize("way", WAYS)
@settings(tame, max_examples=10)
@given(columns=sound_runs(), data=st.data())
def test_a_table_says_what_json_says(ask: Ask, columns: list[Column], data: st.DataObject, way: Any) -> None:
    fault = data.draw(st.sampled_from(["", *REPAIRS]).filter(lambda f: f != "leave out jumps"))
    if fault in ("sort times", "merge equal times", "bridge gaps"):  # times are common, and so are faults
        bad = spoilt(data.draw, replace(columns[0], temperature_c=[*range(len(columns[0].time_s))]), fault)
        columns = [Column(c.name, bad.time_s, c.picked(bad.temperature_c)[1], None) for c in columns]
    elif fault:
        columns[-1] = spoilt(data.draw, columns[-1], fault)
    style = data.draw(st.sampled_from(["{!r}", "{:.17g}", "{:+.17e}", "{:020.9f}"]))
    table, _ = data.draw(written(rows_of(columns, style), way))
    assert send(ask, table) == send(ask, asked(columns))
    assert send(ask, table, **EVERYTHING) == send(ask, asked(columns, repairs=REPAIRS))


@settings(tame, max_examples=80)
@given(columns=sound_runs(), how=st.sampled_from(["word", "shorter", "longer", "timeless"]), data=st.data())
def test_a_spoilt_line_is_named(ask: Ask, columns: list[Column], how: str, data: st.DataObject) -> None:
    rows = rows_of(columns)
    k, column = data.draw(st.integers(1, len(rows) - 1)), data.draw(st.integers(0, len(columns)))
    row, word = rows[k], data.draw(st.sampled_from(WORDS))
    spoilings = {"shorter": row[1:], "longer": [*row, "1.0"], "timeless": ["", *row[1:]]}
    rows[k] = spoilings.get(how, [*row[:column], word, *row[column + 1 :]])
    table, where = data.draw(written(rows, data.draw(st.sampled_from(WAYS))))
    detail = send(ask, table, 422, **EVERYTHING)["errors"][0]["detail"]
    assert (f"Line {where[k]}, column {column + 1}:" if how == "word" else f"Line {where[k]} ") in detail


@settings(wild, max_examples=80)
@given(at=st.integers(0, len(PLAIN)), put=st.text(MARKS[:11] + "\n", max_size=2), cut=st.booleans())
def test_a_torn_table_is_read_as_it_stands_or_refused(ask: Ask, at: int, put: str, cut: bool) -> None:
    table = PLAIN[:at] if cut else PLAIN[:at] + put + PLAIN[at + 1 :]
    answer = send(ask, table)
    if "errors" not in answer:  # then every cell counted, each as the number that stands there
        names, *lines = [line.split(",") for line in table.splitlines() if line]
        times, *rest = zip(*[[float(cell) for cell in line] for line in lines], strict=True)
        read = [Column(n.strip(), [*times], [*c], None) for n, c in zip(names[1:], rest, strict=True)]
        assert answer == send(ask, asked(read))


@pytest.mark.parametrize(
    ("table", "field"),
    [
        ("", "table"),
        ("time,a\n", "table"),  # names only
        ("time\n0\n10\n", "table"),  # one column
        (PLAIN.replace("118", '"118'), "table"),
        (PLAIN.replace("Ground", "CORNER"), "sensors.1.name"),  # names alike but for their case
        (PLAIN.replace("Ground joint", " "), "sensors.1.name"),
        (PLAIN.replace("118", "1e308"), "sensors.0.temperature_c.1"),
        (PLAIN.replace("118", "1e999"), "table"),  # too large to be held, but not missing
        (PLAIN.partition("\n")[2].replace("24", "25", 1), "table"),  # the first samples taken for names
    ],
)
def test_tables_beyond_repair(ask: Ask, table: str, field: str) -> None:
    assert send(ask, table, 422, **EVERYTHING)["errors"][0]["field"] == field


def test_as_many_sensors_as_are_taken_and_one_more(ask: Ask) -> None:
    for many, status in ((MOST_SENSORS, 200), (MOST_SENSORS + 1, 422)):
        columns = [Column(f"s{k}", [0, 50, 100, 150], [24, 99, 213, 55], None) for k in range(many)]
        send(ask, asked(columns), status)
        send(ask, "\n".join(map(",".join, rows_of(columns))), status)


@settings(wild, max_examples=80)
@given(scale=st.sampled_from([1e-322, 1e300, 5e305]) | st.floats(0, 5e305), over_s=st.floats(5e-324, 1e7))
def test_times_of_any_size_are_answered_in_order(ask: Ask, scale: float, over_s: float) -> None:
    times, limits = [(t - 150) * scale for t in RUN["time_s"]], RUN["limits"] | {"averaging_s": over_s}
    for repairs in (REPAIRS[:0], REPAIRS):
        send(ask, RUN | {"time_s": times, "limits": limits, "repairs": repairs})


@wild
@given(data=st.data())
def test_whatever_comes_as_a_table_is_answered_in_order(ask: Ask, data: st.DataObject) -> None:
    good, junk = PLAIN.encode(), st.binary(max_size=40) | st.text(MARKS, max_size=40).map(str.encode)
    at, over = data.draw(st.integers(0, len(good))), data.draw(st.integers(0, 40))
    table = data.draw(junk | junk.map(lambda raw: good[:at] + raw + good[at + over :]))
    send(ask, table, **data.draw(st.sampled_from([{}, EVERYTHING])))


@wild
@given(data=st.data())
def test_whatever_comes_as_json_is_answered_in_order(ask: Ask, data: st.DataObject) -> None:
    body = copy.deepcopy(data.draw(st.sampled_from([e["value"] for e in EXAMPLES.values()])))
    body["repairs"] = list(data.draw(st.sampled_from([[], REPAIRS])))
    for _ in range(data.draw(st.integers(1, 3))):
        there, key = body, data.draw(st.sampled_from(sorted(body)))
        while isinstance(there[key], dict | list) and there[key] and data.draw(st.integers(0, 5)):
            there = there[key]
            key = data.draw(st.sampled_from(sorted(there) if isinstance(there, dict) else range(len(there))))
        if data.draw(st.integers(0, 5)):
            there[key] = copy.deepcopy(data.draw(st.sampled_from(ODD) | st.floats()))
        else:
            del there[key]
    send(ask, body)
