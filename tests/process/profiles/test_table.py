"""Recordings as text: both decimal marks, three separators, quotes, and what is refused."""

import numpy as np
import pytest

from diagrams.errors import InvalidInput
from service.process.profiles.table import channels_from

POINTS = "time,Pad 1,Relay\n0,25.0,24.5\n1.5,27.25,\n3,30,25.5\n"


@pytest.mark.parametrize(
    "text",
    [
        POINTS,
        POINTS.replace("\n", "\r\n"),
        "\ufeff" + POINTS,
        "# line 3 of the Ketterbeck works (invented)\n" + POINTS,
        POINTS.replace(",", ";").replace(".", ","),
        POINTS.replace(",", "\t"),
        'time,"Pad 1","Relay"\n"0","25.0","24.5"\n1.5,27.25,\n3,30,25.5',
        POINTS + "# a remark, and no more\n# 4\n",
        POINTS.replace(",", " , "),
    ],
)
def test_the_same_table_in_many_forms(text: str) -> None:
    pad, relay = channels_from(text)
    assert (pad.name, relay.name) == ("Pad 1", "Relay")
    assert pad.time_s.tolist() == [0.0, 1.5, 3.0]
    assert pad.temperature_c.tolist() == [25.0, 27.25, 30.0]
    assert np.isnan(relay.temperature_c[1])
    assert relay.field == "table.column 3"


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("", "no samples"),
        ("time,a\n", "no samples"),
        ("time\n1\n2\n", "single column"),
        ("time,a\n1,2\n3\n", "Line 3 has 1 columns"),
        ("time,a\n1,25,5\n", "Line 2 has 3 columns"),
        ("time;a\n1;2,5\n2;2.5\n", "point and some a comma"),
        ("time;a\n1;1.000,5\n", "point and some a comma"),
        ("time,a\n1,hot\n", "Line 2, column 2: “hot”"),
        ("time,a\n1,nan\n", "“nan”"),
        ("time,a\n1,inf\n", "“inf”"),
        ("time,a\n1,1_0\n", "“1_0”"),
        ("time,a\n1,2\n,3\n", "Line 3 has no time"),
        ("time,a\n1,2\n#N/A,3\n4,5\n", "Line 3 begins with #"),
        ("\n# above\ntime,a\n\n1,2\nx,3\n", "Line 6, column 1"),
        ("1,2\n3,4\n5,6\n", "numbers where the names"),
        ("time,a\n1,1e999\n", "too large"),
        ('time,a\n1,"2\n3",\n2,3\n', "several lines|columns"),
        ('time,a\n1,"2\n2,3\n', "cannot be read"),
        ("time," + ",".join(f"s{k}" for k in range(65)) + "\n" + ",".join("1" * 66) + "\n", "65 sensors"),
    ],
)
def test_refused_with_the_place(text: str, says: str) -> None:
    with pytest.raises(InvalidInput, match=says) as refused:
        channels_from(text)
    assert refused.value.remedy


def test_a_quoted_name_does_not_choose_the_separator() -> None:
    (only,) = channels_from('time,"x;y"\n0,1\n1,2\n')
    assert (only.name, only.temperature_c.tolist()) == ("x;y", [1.0, 2.0])
