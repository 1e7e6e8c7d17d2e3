"""The picture of a recorded run: what it says, in both forms, from JSON and from a table."""

import itertools

import numpy as np
import pytest

from service.process.profiles.figure import thinned
from service.process.profiles.trace import Trace
from service.routes.profiles import EXAMPLES, TABLE_EXAMPLE
from tests.diagrams.picture import read_svg

FIGURE = "/v1/profile-checks/figure"
RUN = EXAMPLES["reflow"]["value"]


def words(answer):
    assert answer.status_code == 200, answer.text
    assert answer.headers["content-type"] == "image/svg+xml"
    return " ".join(text.words for text in read_svg(answer.content)[1])


def svg(ask, **more):
    return words(ask("POST", f"{FIGURE}?format=svg", json=RUN | more))


def test_png_is_the_default_and_the_same_run_gives_the_same_bytes(ask):
    one, other = (ask("POST", FIGURE, json=RUN) for _ in range(2))
    assert one.headers["content-type"] == "image/png"
    assert one.content.startswith(b"\x89PNG\r\n\x1a\n")
    assert one.content == other.content
    assert ask("POST", f"{FIGURE}?format=svg", json=RUN).content == (
        ask("POST", f"{FIGURE}?format=svg", json=RUN).content
    )


def test_it_says_what_the_answer_says(ask):
    told, checked = svg(ask), ask("POST", "/v1/profile-checks", json=RUN).json()
    window, levels = checked["window"], checked["levels"]
    assert "Passed" in told
    assert f"lowest peak {window['minimum_peak_c']:.1f} °C" in told
    assert f"highest peak {window['maximum_peak_c']:.1f} °C" in told
    assert f"{levels['solidus_c']:.1f} to {levels['liquidus_c']:.1f} °C" in told
    for sensor in checked["sensors"]:
        assert f"{sensor['name']}" in told
        assert f": {sensor['peak_c']:.1f} °C" in told
    tightest = checked["tightest"]
    assert f"{tightest['limit']} of {tightest['sensor']}, margin {tightest['margin']:.1f}" in told
    assert f"{checked['hold_still_s']:.1f} s" in told
    assert "Lead harms nerves" in told
    assert "Local rules and licensed practice decide." in told


def test_a_failed_run_says_why_the_worst_first(ask):
    told = svg(ask, limits={"rise_c_per_s": {"at_most": 0.1}, "peak_spread_c": 3.9})
    assert "Failed" in told
    first = told.index("fastest rise")
    assert first < told.index("peak spread between joints: 4.0 °C, at most 3.9 °C")


def test_a_table_gives_the_picture_of_its_json(ask):
    lines = [line.split(",") for line in TABLE_EXAMPLE.splitlines()[1:]]
    columns = list(zip(*lines, strict=True))
    same = {
        "alloy": {"designation": "Sn63Pb37"},
        "superheat_c": 15,
        "upper_limits": [{"name": "limit", "limit_c": 235}],
        "time_s": [float(t) for t in columns[0][1:]],
        "sensors": [{"name": c[0], "temperature_c": [float(v) for v in c[1:]]} for c in columns[1:]],
    }
    table = ask("POST", f"{FIGURE}?format=svg", content=TABLE_EXAMPLE, headers={"content-type": "text/csv"})
    assert table.content == ask("POST", f"{FIGURE}?format=svg", json=same).content
    assert "Ground joint" in words(table)


def test_without_data_it_says_so_and_a_window_may_be_given(ask):
    told = svg(ask, alloy={"designation": "BAg-1"}, upper_limits=[], readings_are_celsius=True, limits={})
    assert "no data tell the liquid fraction" in told
    given = {k: v for k, v in RUN.items() if k not in ("superheat_c", "upper_limits")}
    answer = ask("POST", f"{FIGURE}?format=svg", json=given | {"window": {"minimum_peak_c": 205}})
    assert "highest not bounded" in words(answer)


def test_as_many_sensors_and_samples_as_a_check_takes(ask):
    times = np.linspace(0, 600, 5000)
    readings = 25 + 185 * np.exp(-(((times - 300) / 90) ** 2))
    sensors = [{"name": f"s{k}", "temperature_c": (readings + 0.2 * k).tolist()} for k in range(64)]
    told = svg(ask, time_s=times.tolist(), sensors=sensors, limits={})
    assert "s13" in told
    assert "and 50 more" in told


@pytest.mark.parametrize("samples", [50, 4000, 4001, 123_457])
def test_thinning_keeps_every_extreme_and_only_samples(samples):
    rng = np.random.default_rng(samples)
    times = np.cumsum(rng.uniform(0.1, 2.0, samples))
    trace = Trace("x", times, rng.normal(100, 30, samples))
    kept_times, kept = thinned(trace)
    assert len(kept_times) <= 4004
    assert set(zip(kept_times, kept, strict=True)) <= set(zip(times, trace.temperature_c, strict=True))
    assert (kept.min(), kept.max()) == (trace.temperature_c.min(), trace.temperature_c.max())
    assert (kept_times[0], kept_times[-1]) == (times[0], times[-1])
    edges = np.linspace(times[0], times[-1], 1001)
    for low, high in itertools.pairwise(edges[100:111]):  # column by column, another way
        inside = (times >= low) & (times < high)
        if inside.any():
            drawn = kept[(kept_times >= low) & (kept_times < high)]
            assert drawn.max() == pytest.approx(trace.temperature_c[inside].max())
            assert drawn.min() == pytest.approx(trace.temperature_c[inside].min())


@pytest.mark.parametrize(
    ("address", "field"),
    [("?format=pdf", "format"), ("?format=svg&alloy=Sn", "alloy"), ("?colour=1", "colour")],
)
def test_what_is_wrong_is_named(ask, address, field):
    answer = ask("POST", FIGURE + address, json=RUN)
    assert answer.status_code == 422
    assert answer.json()["errors"][0]["field"] == field


def test_a_format_has_no_place_beside_a_check(ask):
    assert ask("POST", "/v1/profile-checks?format=svg", json=RUN).status_code == 422


def test_names_in_any_script_and_with_signs_that_no_picture_holds(ask):
    """An SVG must stay readable XML, a PNG must not fail, whatever a logger called its channels."""
    names = ["左上角", "A\u0001b\u0007", "tab\there", "\ufffe end", "🔥 hot"]
    sensors = [RUN["sensors"][0] | {"name": name} for name in names]
    told = svg(ask, sensors=sensors)
    assert "左上角" in told
    assert "A\ufffdb\ufffd" in told
    assert ask("POST", FIGURE, json=RUN | {"sensors": sensors}).status_code == 200


def test_it_says_which_uncertainties_the_window_counts(ask):
    assert "worst case of alloy, data and sensor" in svg(ask)
    more = {"sensor_class": "IEC 60584 type K class 1", "count_data": True, "combination": "root-sum-square"}
    question = {key: value for key, value in RUN.items() if key != "sensor_tolerance_c"} | more
    told = words(ask("POST", f"{FIGURE}?format=svg", json=question))
    assert "root-sum-square of alloy, data and sensor, IEC 60584 type K class 1" in told
    assert "data as compared with prints" in told
    assert "at most 230.0 °C (dotted)" in told
