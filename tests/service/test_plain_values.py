"""Numbers and switches in an address line, as strict as in a body; bodies of other codings."""

import gzip

import pytest

BODY = b'{"alloy": {"designation": "Sn63Pb37"}, "temperature_c": 200}'


@pytest.mark.parametrize("text", ["200", "200.0", "2e2", "-10", "0", "1.5E+2"])
def test_numbers_as_json_writes_them_are_read(ask, text):
    answer = ask("GET", f"/v1/safety?temperature_c={text.replace('+', '%2B')}")
    assert answer.status_code == 200, answer.text


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("2_00", "plain number"),
        ("+200", "plus sign"),
        ("%2B200", "plus sign"),
        ("%20200", "spaces"),
        ("200%20", "plain number"),
        ("0200", "plain number"),
        (".5", "plain number"),
        ("5.", "plain number"),
        ("183,5", "after a point"),
        ("0x10", "plain number"),
        ("%D9%A3", "plain number"),
        ("true", "plain number"),
        ("", "plain number"),
        ("nan", "NaN"),
        ("-Infinity", "NaN"),
        ("1e999", "ordinary number"),
    ],
)
@pytest.mark.parametrize(
    ("path", "name"),
    [
        ("/v1/safety?", "temperature_c"),
        ("/v1/equilibrium?alloy=Sn63Pb37&", "temperature_c"),
        ("/v1/window?alloy=Sn63Pb37&target_liquid_fraction=1&", "limit_c"),
        ("/v1/fillers?", "liquidus_max_c"),
    ],
)
def test_numbers_written_otherwise_are_refused(ask, path, name, text, words):
    answer = ask("GET", f"{path}{name}={text}")
    assert answer.status_code == 422, answer.text
    (error,) = answer.json()["errors"]
    assert (error["field"], error["parameter"]) == (name, name)
    assert words in error["remedy"]


@pytest.mark.parametrize("text", ["yes", "1", "0", "on", "True", "FALSE", "t", "", "%20true"])
@pytest.mark.parametrize("name", ["lead_free", "covered"])
def test_a_switch_is_true_or_false_and_nothing_else(ask, name, text):
    answer = ask("GET", f"/v1/fillers?{name}={text}")
    assert answer.status_code == 422
    (error,) = answer.json()["errors"]
    assert (error["field"], error["remedy"]) == (name, "Write true or false, in lower case.")
    counts = {ask("GET", f"/v1/fillers?{name}={text}").json()["count"] for text in ("true", "false")}
    assert len(counts) == 2


@pytest.mark.parametrize("charset", ["utf-8", "UTF-8", '"utf-8"', "utf8", "us-ascii"])
def test_utf_8_by_any_name_is_read(ask, charset):
    kind = {"Content-Type": f"application/json; charset={charset}"}
    assert ask("POST", "/v1/equilibrium", content=BODY, headers=kind).status_code == 200


@pytest.mark.parametrize(
    ("body", "headers", "words"),
    [
        (BODY, {"Content-Type": "application/json; charset=iso-8859-1"}, "send UTF-8"),
        (BODY.decode().encode("utf-16"), {"Content-Type": "application/json;charset=UTF-16"}, "send UTF-8"),
        (BODY, {"Content-Type": "application/json; a=b; Charset = 'utf-8'"}, "send UTF-8"),
        (gzip.compress(BODY), {"Content-Encoding": "gzip"}, "without Content-Encoding"),
        (BODY, {"Content-Encoding": "br"}, "without Content-Encoding"),
    ],
)
def test_bodies_in_another_coding_are_refused_with_the_remedy(ask, body, headers, words):
    answer = ask(
        "POST", "/v1/equilibrium", content=body, headers={"Content-Type": "application/json"} | headers
    )
    assert answer.status_code == 415
    assert answer.json()["code"] == "unsupported-media-type"
    assert words in answer.json()["detail"]
    assert ("Content-Encoding" in headers) is (answer.headers.get("accept-encoding") == "identity")


def test_a_body_coded_as_itself_is_read(ask):
    headers = {"Content-Type": "application/json", "Content-Encoding": "identity"}
    assert ask("POST", "/v1/equilibrium", content=BODY, headers=headers).status_code == 200


def test_the_tolerance_of_a_window_in_an_address_is_that_of_a_body(ask):
    address = {"alloy": "Sn60Pb40", "target_liquid_fraction": 1, "tolerance_wt": "Sn:2", "limit_c": 230}
    got = ask("GET", "/v1/window", params=address).json()
    alloy = {"designation": "Sn60Pb40", "tolerance_wt": {"Sn": 2}}
    limits = [{"name": "limit", "limit_c": 230}]
    body = {"alloy": alloy, "target_liquid_fraction": 1, "upper_limits": limits}
    posted = ask("POST", "/v1/window", json=body).json()
    assert got == posted
    without = ask("GET", "/v1/window", params=address | {"tolerance_wt": "Sn:0"}).json()
    assert without["minimum_peak_c"] < got["minimum_peak_c"]
    wrong = ask("GET", "/v1/window", params=address | {"tolerance_wt": "Sn"}).json()["errors"]
    assert wrong[0]["field"] == "tolerance_wt"
