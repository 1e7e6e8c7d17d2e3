"""Words and bounds that questions and answers about recorded runs share with the rules."""

from typing import Literal, get_args

MOST_SENSORS, MOST_SAMPLES = 64, 200_000

Side = Literal["at least", "at most"]
Repair = Literal[
    "leave out empty sensors",
    "leave out missing samples",
    "sort times",
    "merge equal times",
    "leave out jumps",
    "bridge gaps",
    "leave out dead sensors",
]
REPAIRS: tuple[Repair, ...] = get_args(Repair)
