"""Profile limits of public standards, named by standard and edition in place of typing them in."""

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

from diagrams.errors import DataFault, InvalidInput
from diagrams.fillers import designation_key
from diagrams.reference import reference_edition, reference_table
from diagrams.sources import Source
from service.process.bounds import Bounds
from service.process.known_limits import PROCESS_LIMITS
from service.process.profiles.demands import Demand, NearPeak, Peak, Rate, Soak, TimeAbove, ToPeak

TOPIC = "J-STD-020D Table 5-2 reflow profile"
STANDARD = "J-STD-020D"
NEAR_C, FROM_C = 5.0, 25.0  # as the rows of the table are called
FIELD = "standard_profile"


@dataclass(frozen=True)
class StandardProfile:
    """The limits of one column of the table; `note` says what the standard means them for."""

    key: str
    demands: tuple[Demand, ...]
    near_peak_s: float
    source: Source
    note: str
    edition: str

    def with_classification(self, classification_c: float | None) -> tuple[Demand, ...]:
        """All demands; those that refer to the component's classification temperature only if it is given."""
        if classification_c is None:
            return self.demands
        origin = f"{self.key}: "
        near = NearPeak(NEAR_C, Bounds(high=self.near_peak_s), classification_c, origin)
        return (*self.demands, near, Peak(Bounds(high=classification_c), origin))


@cache
def standard_profiles(averaging_s: float) -> Mapping[str, StandardProfile]:
    """All by key; rates are taken over `averaging_s` seconds, for which the standard names no time."""
    rows = [row for row in reference_table(PROCESS_LIMITS) if row["topic"] == TOPIC]
    conditions = sorted({row["condition"] for row in rows if row["condition"].endswith("assembly")})
    return {
        f"{STANDARD} {condition}": _profile(
            f"{STANDARD} {condition}", [row for row in rows if row["condition"] == condition], averaging_s
        )
        for condition in conditions
    }


def standard_profile(text: str, averaging_s: float) -> StandardProfile:
    """The profile of a key, without regard to case, spaces and hyphens; InvalidInput lists all."""
    profiles = standard_profiles(averaging_s)
    for key, found in profiles.items():
        if designation_key(key) == designation_key(text):
            return found
    raise InvalidInput(
        f"“{text}” is no stored profile of a standard.",
        field=FIELD,
        remedy=f"Name one of: {', '.join(profiles)}.",
    )


def _profile(key: str, rows: list[Mapping[str, str]], averaging_s: float) -> StandardProfile:
    def bound(item: str, column: str) -> float:
        found = [row[column] for row in rows if row["item"] == item]
        if len(found) != 1 or not found[0]:
            raise DataFault(f"{PROCESS_LIMITS} has no single {column} of {item} for {key}.", field=item)
        return float(found[0])

    def both(item: str) -> Bounds:
        return Bounds(bound(item, "min"), bound(item, "max"))

    origin = f"{key}: "
    level_c = bound("liquidus temperature TL", "max")
    rise, fall = (
        Bounds(high=bound(item, "max")) for item in ("ramp-up rate TL to Tp", "ramp-down rate Tp to TL")
    )
    low_c, high_c = (bound(f"preheat {end} temperature", "max") for end in ("minimum", "maximum"))
    demands: tuple[Demand, ...] = (
        Soak(low_c, high_c, both("preheat time Tsmin to Tsmax"), origin),
        Rate("rise", rise, averaging_s, level_c, origin),
        TimeAbove(level_c, both("time above TL"), origin, joints_only=False),
        Rate("fall", fall, averaging_s, level_c, origin),
        ToPeak(FROM_C, Bounds(high=bound(f"time {FROM_C:g} °C to peak", "max")), origin),
    )
    first = rows[0]
    return StandardProfile(
        key,
        demands,
        bound(f"time within {NEAR_C:g} °C of Tc", "max"),
        Source(first["source"], first["how"], first["confidence"]),
        first["notes"],
        reference_edition(PROCESS_LIMITS),
    )
