"""Bad and broken recordings, tried widely: never a fault of ours, never a repair that was not asked for."""

import json
import math
from itertools import pairwise

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

CHECK, TABLE = "/v1/profile-checks", {"content-type": "text/csv"}
BARE = {"alloy": {"designation": "Sn63Pb37"}, "superheat_c": 10}
ADDRESS = f"{CHECK}?alloy=Sn63Pb37&superheat_c=10"
SHAPE = [(0.0, 25.0), (60.0, 150.0), (150.0, 175.0), (190.0, 215.0), (205.0, 214.0), (300.0, 60.0)]


def shape(time_s):
    """The run that all records follow: straight between the corners."""
    for (t0, c0), (t1, c1) in pairwise(SHAPE):
        if t0 <= time_s <= t1:
            return c0 + (c1 - c0) * (time_s - t0) / (t1 - t0)
    raise ValueError(time_s)


@st.composite
def records(draw):
    """One to four sensors on shared times, sampled evenly or not, a few degrees apart."""
    count = draw(st.integers(40, 90))
    jitter = draw(st.sampled_from([0.0, 0.3]))
    step = 300.0 / count
    shifts = [draw(st.floats(-jitter, jitter)) if 0 < k < count else 0.0 for k in range(count + 1)]
    times = [min(300.0, max(0.0, (k + shift) * step)) for k, shift in enumerate(shifts)]
    offsets = draw(st.lists(st.floats(-4.0, 4.0), min_size=1, max_size=4))
    return times, [[round(shape(t) + offset, 3) for t in times] for offset in offsets]


def sensors_of(times, columns):
    return [
        {"name": f"s{k}", "time_s": list(times), "temperature_c": list(column)}
        for k, column in enumerate(columns)
    ]


def in_order(answer):
    """An answer or a problem document with a field, a remedy and cautions; nothing else, and no fault."""
    assert answer.status_code in (200, 400, 413, 415, 422), answer.text
    found = answer.json()
    assert found["safety"]["notes"]
    if answer.status_code != 200:
        assert answer.headers["content-type"] == "application/problem+json"
        assert found["errors"] or answer.status_code in (413, 415)
        assert all(error["field"] and error["remedy"] for error in found["errors"])
    return found


# Each fault spoils sensor 0 at sample k and says what has to come of it: field, repair, samples touched.
def empty(sensor, k):
    sensor["temperature_c"] = [None] * len(sensor["time_s"])
    return "sensors.0", "leave out empty sensors", len(sensor["time_s"])


def missing(sensor, k):
    sensor["temperature_c"][k] = None
    return f"sensors.0.temperature_c.{k}", "leave out missing samples", 1


def backwards(sensor, k):
    for column in ("time_s", "temperature_c"):
        values = sensor[column]
        values[k], values[k + 1] = values[k + 1], values[k]
    return f"sensors.0.time_s.{k + 1}", "sort times", 1


def doubled(sensor, k):
    sensor["time_s"].insert(k, sensor["time_s"][k])
    sensor["temperature_c"].insert(k, sensor["temperature_c"][k])
    return f"sensors.0.time_s.{k + 1}", "merge equal times", 1


def jump(sensor, k):
    sensor["time_s"].insert(k + 1, sensor["time_s"][k] + 1e-3)
    sensor["temperature_c"].insert(k + 1, sensor["temperature_c"][k] + 900.0)
    return f"sensors.0.temperature_c.{k + 1}", "leave out jumps", 1


def gap(sensor, k):
    for column, shift in (("time_s", 500.0), ("temperature_c", 0.0)):
        sensor[column][k:] = [value + shift for value in sensor[column][k:]]
    return f"sensors.0.time_s.{k}", "bridge gaps", 1


FAULTS = [empty, missing, backwards, doubled, jump, gap]


@settings(max_examples=60)
@given(record=records(), fault=st.sampled_from(FAULTS), place=st.floats(0.1, 0.9))
def test_a_fault_is_refused_and_the_repair_asked_for_is_all_that_is_done(ask, record, fault, place):
    times, columns = record
    sensors = sensors_of(times, [*columns, columns[0]])  # so that one is left where one is left out
    field, repair, count = fault(sensors[0], int(place * len(times)))
    refused = ask("POST", CHECK, json=BARE | {"sensors": sensors})
    assert refused.status_code == 422
    (error,) = in_order(refused)["errors"]
    assert error["field"] == field
    assert f"“{repair}”" in error["remedy"]
    mended = in_order(ask("POST", CHECK, json=BARE | {"sensors": sensors, "repairs": [repair]}))
    assert mended["repairs"] == [{"repair": repair, "sensor": "s0", "count": count}]
    others = [other for other in REPAIRS if other != repair]
    assert ask("POST", CHECK, json=BARE | {"sensors": sensors, "repairs": others}).status_code == 422


REPAIRS = [
    "leave out empty sensors",
    "leave out missing samples",
    "sort times",
    "merge equal times",
    "leave out jumps",
    "bridge gaps",
    "leave out dead sensors",
]


@settings(max_examples=40)
@given(record=records(), order=st.randoms(use_true_random=False))
def test_a_sound_record_is_judged_untouched_in_any_order(ask, record, order):
    times, columns = record
    sensors = sensors_of(times, columns)
    found = in_order(ask("POST", CHECK, json=BARE | {"sensors": sensors, "repairs": REPAIRS}))
    assert found["repairs"] == []
    shuffled = list(sensors)
    order.shuffle(shuffled)
    other = in_order(ask("POST", CHECK, json=BARE | {"sensors": shuffled}))
    assert (other["verdict"], other["tightest"]) == (found["verdict"], found["tightest"])
    peaks = {sensor["name"]: sensor["peak_c"] for sensor in other["sensors"]}
    assert peaks == {sensor["name"]: max(sensor["temperature_c"]) for sensor in sensors}


@settings(max_examples=25)
@given(record=records(), convert=st.sampled_from([lambda c: c + 273.15, lambda c: 1.8 * c + 32.0]))
def test_other_units_are_refused_with_a_hint(ask, record, convert):
    times, columns = record
    sensors = sensors_of(times, [[convert(c) for c in column] for column in columns])
    (error,) = in_order(ask("POST", CHECK, json=BARE | {"sensors": sensors}))["errors"]
    assert error["field"] == "sensors"
    assert "kelvin" in error["remedy"] or "Fahrenheit" in error["remedy"]


@settings(max_examples=25)
@given(record=records(), stands_c=st.floats(15.0, 30.0), noise=st.booleans())
def test_a_dead_sensor_is_refused_or_left_out(ask, record, stands_c, noise):
    times, columns = record
    dead = [stands_c + (0.2 * (k % 2) if noise else 0.0) for k in range(len(times))]
    sensors = sensors_of(times, [dead, *columns])
    (error,) = in_order(ask("POST", CHECK, json=BARE | {"sensors": sensors}))["errors"]
    assert error["field"] == "sensors.0"
    body = BARE | {"sensors": sensors, "repairs": ["leave out dead sensors"]}
    mended = in_order(ask("POST", CHECK, json=body))["repairs"]
    assert mended == [{"repair": "leave out dead sensors", "sensor": "s0", "count": len(times)}]


SEPARATED = {";": ",", "\t": ",", ",": "."}  # separator and the decimal mark that goes with it


def table_of(times, columns, separator, end, *, quoted=False):
    mark = SEPARATED[separator]
    head = ["time", *(f"s{k}" for k in range(len(columns)))]
    rows = [[repr(t), *map(repr, row)] for t, row in zip(times, zip(*columns, strict=True), strict=True)]
    cells = [head, *([cell.replace(".", mark) for cell in row] for row in rows)]
    wrap = '"{}"'.format if quoted else str
    return end.join(separator.join(map(wrap, row)) for row in cells) + end


@settings(max_examples=40)
@given(
    record=records(),
    separator=st.sampled_from(sorted(SEPARATED)),
    end=st.sampled_from(["\n", "\r\n"]),
    quoted=st.booleans(),
    before=st.sampled_from(["", "\ufeff", "# of the Ketterbeck works (invented)\n"]),
)
def test_a_table_says_what_its_json_says(ask, record, separator, end, quoted, before):
    times, columns = record
    text = before + table_of(times, columns, separator, end, quoted=quoted)
    table = ask("POST", ADDRESS, content=text.encode(), headers=TABLE)
    assert table.status_code == 200, table.text
    assert table.content == ask("POST", CHECK, json=BARE | {"sensors": sensors_of(times, columns)}).content


@settings(max_examples=150)
@given(
    record=records(),
    row=st.floats(0.0, 1.0),
    cut=st.integers(1, 400),
    put=st.sampled_from(
        ["nan", "inf", "1e999", "-", "", ";", ",", "\t", '"', "1.2.3", "0x1F", "٣", "\0", "9e307", "#"]
    ),
)
def test_a_spoilt_table_never_fails_us(ask, record, row, cut, put):
    times, columns = record
    text = table_of(times, columns, ",", "\n")
    place = int(row * (len(text) - 1))
    for spoilt in (
        text[:place] + put + text[place:],
        text[:place] + put + text[place + cut :],
        text[:cut] + put,
    ):
        found = in_order(ask("POST", ADDRESS, content=spoilt.encode(), headers=TABLE))
        assert "verdict" not in found or found["repairs"] == []


@settings(max_examples=100)
@given(
    content=st.binary(max_size=300),
    first=st.sampled_from([b"", b"time,a\n", b"#? alloy=Sn63Pb37\n", b"a;b\n0;"]),
)
def test_any_bytes_never_fail_us(ask, content, first):
    in_order(ask("POST", ADDRESS, content=first + content, headers=TABLE))
    parts = {"question": (None, json.dumps(BARE)), "table": ("run.csv", first + content)}
    in_order(ask("POST", CHECK, files=parts))


FIELDS = ["alloy", "time_s", "sensors", "limits", "window", "repairs", "longest_gap_s", "spread_c"]
ODD = st.one_of(
    st.none(),
    st.booleans(),
    st.integers(-(10**30), 10**30),
    st.floats(),
    st.text(max_size=8),
    st.just([]),
    st.just({}),
    st.lists(st.one_of(st.none(), st.floats()), max_size=4),
)


@settings(max_examples=200)
@given(
    field=st.sampled_from(FIELDS),
    inner=st.sampled_from([None, "name", "on", "limit_c", "time_s", "temperature_c"]),
    odd=ODD,
)
def test_odd_values_never_fail_us(ask, field, inner, odd):
    times = [t for t, _ in SHAPE]
    body = BARE | {"longest_gap_s": 500, "sensors": sensors_of(times, [[c for _, c in SHAPE]])}
    if inner is None:
        body[field] = odd
    else:
        body["sensors"][0][inner] = odd
    text = json.dumps(body)  # writes NaN and Infinity, as careless clients do
    in_order(ask("POST", CHECK, content=text.encode(), headers={"content-type": "application/json"}))


@pytest.mark.parametrize("factor", [1e-300, 1e-6, 1e6, 1e300])
def test_times_of_any_size(ask, factor):
    sensors = sensors_of([t * factor for t, _ in SHAPE], [[c for _, c in SHAPE]])
    limits = {"rise_c_per_s": {"at_most": 3}, "time_above_solidus_s": {"at_least": 10}}
    answer = ask("POST", CHECK, json=BARE | {"sensors": sensors, "limits": limits, "repairs": REPAIRS})
    found = in_order(answer)
    if answer.status_code == 200:
        assert all(math.isfinite(one["peak_at_s"]) for one in found["sensors"])
