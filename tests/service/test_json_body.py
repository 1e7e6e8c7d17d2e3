import json
import math

import pytest

from service.json_body import (
    MOST_BRACKETS,
    MOST_COLONS,
    MOST_KEYS,
    DuplicateKey,
    TooManyKeys,
    TooManyObjects,
    UnreadableJson,
    read_json,
)


def test_ordinary_json_is_read_as_it_is():
    assert read_json('{"a": [1, 2.5, null, true, "µ"], "b": {"a": {}}}'.encode()) == {
        "a": [1, 2.5, None, True, "µ"],
        "b": {"a": {}},
    }


@pytest.mark.parametrize(
    ("text", "path"),
    [
        ('{"a": 1, "a": 1}', ("a",)),
        ('{"alloy": {"composition_wt": {"Sn": 60, "Pb": 40, "Sn": 3}}}', ("alloy", "composition_wt", "Sn")),
        ('{"parts": [{"x": 1}, {"x": 1, "x": 2}]}', ("parts", 1, "x")),
        ('[{"a": 1}, {"b": [{"": 1, "": 2}]}]', (1, "b", 0, "")),
        ('{"a": [[], [{}], {"b": {}}], "c": {"d": {"e": [1, 2]}, "f": 1, "f": 2}}', ("c", "f")),
        ('[{"outer": 1, "inner": {"x": 1, "x": 1}, "outer": 1}]', (0, "outer")),
    ],
)
def test_a_key_given_twice_is_refused_with_its_path(text, path):
    with pytest.raises(DuplicateKey) as caught:
        read_json(text.encode())
    assert caught.value.path == path


@pytest.mark.parametrize(
    ("body", "place", "words"),
    [
        (b'{"a": 1,\n "b": }', (2, 7), "Expecting value"),
        (b'{"a": 1} x', (1, 10), "Extra data"),
        (b'{\n"a": "\xff"}', (2, 7), "no UTF-8"),
        (b"[" * 9_000, None, "nested too deeply"),
        (b"[" + b"1" * 5000 + b"]", None, "too many digits"),
        (rb'{"\ud800": 1}', None, "surrogate"),
        (rb'["\\u0041", "\udc00\ud800"]', None, "surrogate"),
        ("\ufeff{}".encode(), (1, 1), "byte order mark"),
    ],
)
def test_what_is_no_json_is_refused_with_its_place(body, place, words):
    with pytest.raises(UnreadableJson, match=words) as caught:
        read_json(body)
    assert caught.value.place == place
    assert ("at line" in str(caught.value)) is (place is not None)


def test_a_doubled_key_is_found_in_a_large_deep_body_by_looking_at_each_value_once():
    deep, wide = 400, 3_000_000
    body = b'{"wide": %s0%s%s, "next": [%s{"a": 1, "a": 2}]}'
    with pytest.raises(DuplicateKey) as caught:
        read_json(body % (b"[" * deep, b",0" * wide, b"]" * deep, b"0," * wide))
    assert caught.value.path == ("next", wide, "a")


@pytest.mark.parametrize(
    "body", [b'{"a": 1, "a": 2', b'{"a": 1, "a": 2}}', b'[{"a": 1, "a": 2}, ' + b"[" * 9_000]
)
def test_what_is_broken_behind_a_doubled_key_is_refused_as_unreadable(body):
    with pytest.raises(UnreadableJson):
        read_json(body)


def test_keys_and_objects_are_as_many_as_a_question_may_need_and_no_more():
    keys = [f'"k{k}": 0' for k in range(MOST_KEYS + 1)]
    assert len(read_json(f"{{{', '.join(keys[1:])}}}".encode())) == MOST_KEYS
    with pytest.raises(TooManyKeys) as caught:
        read_json(f'{{"x": [0, {{{", ".join(keys)}}}]}}'.encode())
    assert caught.value.path == ("x", 1)


@pytest.mark.parametrize("value", [b"{}", b"[]"])
def test_objects_and_lists_are_bounded_together(value):
    most = MOST_BRACKETS - 1  # the list around them counts
    assert len(read_json(b"[" + b",".join([value] * most) + b"]")) == most
    with pytest.raises(TooManyObjects):
        read_json(b"[" + b",".join([value] * (most + 1)) + b"]")


def test_fields_are_bounded():
    objects = [b"{%s}" % b",".join(b'"k%d":0' % k for k in range(100))] * (MOST_COLONS // 100)
    assert len(read_json(b"[%s]" % b",".join(objects))) == MOST_COLONS // 100
    with pytest.raises(TooManyObjects):
        read_json(b'[%s,{"x":0}]' % b",".join(objects))


def test_whole_surrogate_pairs_and_escaped_backslashes_are_fine():
    assert read_json(rb'["\ud83d\ude00", "\\ud800"]') == ["\U0001f600", "\\ud800"]


def test_numbers_that_are_none_are_left_for_the_models_to_refuse_by_field():
    read = read_json(b'{"a": NaN, "b": 1e999, "c": -Infinity}')
    assert math.isnan(read["a"])
    assert (read["b"], read["c"]) == (math.inf, -math.inf)


COLUMN = [0.1, -2.5e-3, 7, 1e300, 0.1 + 0.2] * 20_000


def test_long_columns_are_read_as_ever():
    body = json.dumps({"a": COLUMN, "b": [{"c": COLUMN, "d": [None, True, "x, [1, 2]"]}]}).encode()
    read = read_json(body)
    assert read == json.loads(body)
    assert [type(v) for v in read["a"][:3]] == [float, float, int]


@pytest.mark.parametrize(
    ("text", "fault"),
    [
        ('{"a": %s, "a": 1}', DuplicateKey),
        ('{"b": [{"c": %s, "c": %s}]}', DuplicateKey),
        ('{"a": %s, "b": 1,}', UnreadableJson),
        ('{"a": %s, "b": [1, 2}', UnreadableJson),
        ('{"a": [1, 2,, 3], "b": %s}', UnreadableJson),
        ('{"a": [01, 2], "b": %s}', UnreadableJson),
    ],
)
def test_faults_beside_long_columns_are_found(text, fault):
    with pytest.raises(fault):
        read_json((text.replace("%s", json.dumps(COLUMN))).encode())


def test_what_is_no_json_number_comes_through_for_the_models():
    body = ('{"b": [NaN, Infinity, 1e999], "a": ' + json.dumps(COLUMN) + "}").encode()
    assert str(read_json(body)["b"]) == "[nan, inf, inf]"


LONG_COLUMN = json.dumps([round(0.01 * k, 2) for k in range(40_000)])


@pytest.mark.parametrize(
    ("inside", "path"),
    [
        ('"a": 1, "a": 2', ("a",)),
        ('"a": [1, {"b": 1, "b": 2}]', ("a", 1, "b")),
        ('"a": {"b": [[], {"c": 1, "c": 1}]}', ("a", "b", 1, "c")),
        ('"name": "U7: [corner] {x}", "a": 1, "a": 2', ("a",)),
    ],
)
def test_a_doubled_key_beside_a_long_column_is_found(inside, path):
    with pytest.raises(DuplicateKey) as refused:
        read_json(f'{{"column": {LONG_COLUMN}, {inside}}}'.encode())
    assert refused.value.path == path


@pytest.mark.parametrize(
    "inside",
    ['"a": 1', '"name": "U7: [corner] {x}"', '"a": [1, {"b": [2, [3]]}]', '"a": [[], {}, {"b": {}}]'],
)
def test_a_long_body_reads_as_any_other(inside):
    text = f'{{"column": {LONG_COLUMN}, {inside}}}'
    assert read_json(text.encode()) == json.loads(text)
