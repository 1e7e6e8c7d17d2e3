"""From a question about a run to the demands on it and the records it is about."""

import numpy as np

from diagrams.errors import InvalidInput
from service.process.bounds import Bounds
from service.process.profiles.demands import Demand, Freezing, NearPeak, Rate, Soak, TimeAbove, ToPeak
from service.process.profiles.recording import Channel, Rules
from service.process.profiles.standards import StandardProfile, standard_profile
from service.process.profiles.trace import Floats
from service.process.upper_limits import COMPONENT, upper_limit
from service.schemas.profile import BoundsAsked, ProfileQuestion, SensorAsked

MADE_UP_OF = ("superheat_c", "spread_c", "upper_limits")  # what a window is worked out from


def demands_of(question: ProfileQuestion) -> tuple[list[Demand], StandardProfile | None]:
    """Own demands and those of the standard named; raises InvalidInput naming the field."""
    asked = question.limits
    over_s = asked.averaging_s
    demands: list[Demand] = []
    if asked.rise_c_per_s is not None:
        demands.append(Rate("rise", _bounds(asked.rise_c_per_s, "rise_c_per_s"), over_s))
    if asked.fall_c_per_s is not None:
        demands.append(Rate("fall", _bounds(asked.fall_c_per_s, "fall_c_per_s"), over_s))
    if asked.freezing_c_per_s is not None:
        demands.append(Freezing(_bounds(asked.freezing_c_per_s, "freezing_c_per_s"), over_s))
    if asked.time_above_solidus_s is not None:
        demands.append(TimeAbove("solidus", _bounds(asked.time_above_solidus_s, "time_above_solidus_s")))
    if asked.time_at_target_s is not None:
        demands.append(TimeAbove("target", _bounds(asked.time_at_target_s, "time_at_target_s")))
    if asked.soak is not None:
        soak = asked.soak
        if soak.from_c >= soak.to_c:
            raise InvalidInput(
                f"A soak from {soak.from_c:g} to {soak.to_c:g} °C has no range.",
                field="limits.soak.to_c",
                remedy="Give a higher temperature than from_c.",
            )
        demands.append(Soak(soak.from_c, soak.to_c, _bounds(soak.time_s, "soak.time_s")))
    if asked.near_peak is not None:
        near = asked.near_peak
        demands.append(NearPeak(near.within_c, _bounds(near.time_s, "near_peak.time_s"), near.of_c))
    if asked.to_peak is not None:
        demands.append(ToPeak(asked.to_peak.from_c, _bounds(asked.to_peak.time_s, "to_peak.time_s")))
    standard = None
    if question.standard_profile is not None:
        standard = standard_profile(question.standard_profile, over_s)
        demands += standard.with_classification(_classification_c(question))
    elif question.classification is not None:
        raise InvalidInput(
            "A classification temperature belongs to a standard profile, and none is named.",
            field="classification",
            remedy="Name one in standard_profile, or give the temperature as an upper limit.",
        )
    return demands, standard


def window_given(question: ProfileQuestion) -> Bounds | None:
    """The window that came with the question; InvalidInput if it also says how to work one out."""
    given = question.window
    if given is None:
        return None
    for field in MADE_UP_OF:
        if field in question.model_fields_set:
            raise InvalidInput(
                f"A window is given, and {field} to work one out as well.",
                field=field,
                remedy="Leave out either the window or this.",
            )
    low, high = given.minimum_peak_c, given.maximum_peak_c
    if low is None and high is None:
        raise InvalidInput(
            "The window has no end.", field="window", remedy="Give minimum_peak_c, maximum_peak_c or both."
        )
    if low is not None and high is not None and low > high:
        raise InvalidInput(
            f"A window from {low:g} to {high:g} °C holds nothing.",
            field="window.maximum_peak_c",
            remedy="Give a maximum that is not below the minimum.",
        )
    return Bounds(low, high)


def rules_of(question: ProfileQuestion) -> Rules:
    """What counts as a fault of the record."""
    return Rules(frozenset(question.repairs), question.longest_gap_s, question.fastest_c_per_s)


def channels_of(question: ProfileQuestion) -> list[Channel]:
    """The columns of every sensor; raises InvalidInput for columns of different length or without times."""
    shared = None if question.time_s is None else np.array(question.time_s, dtype=np.float64)
    return [_channel(sensor, f"sensors.{k}", shared) for k, sensor in enumerate(question.sensors)]


def _channel(sensor: SensorAsked, field: str, shared: Floats | None) -> Channel:
    if sensor.limit_c is not None and sensor.on == "joint":
        raise InvalidInput(
            f"Sensor “{sensor.name}” sits on a joint and has a limit of its own.",
            field=f"{field}.limit_c",
            remedy='Say "on": "part", or give the limit in upper_limits.',
        )
    times = shared if sensor.time_s is None else np.array(sensor.time_s, dtype=np.float64)
    if times is None:
        raise InvalidInput(
            f"Sensor “{sensor.name}” has no times.",
            field=f"{field}.time_s",
            remedy="Give time_s here, or once for all sensors beside them.",
        )
    readings = np.array(sensor.temperature_c, dtype=np.float64)  # null becomes NaN: a missing sample
    if len(times) != len(readings):
        raise InvalidInput(
            f"Sensor “{sensor.name}” has {len(times)} times and {len(readings)} readings.",
            field=f"{field}.temperature_c",
            remedy="Give one reading for every time; null where a sample is missing.",
        )
    return Channel(sensor.name, times, readings, field)


def _classification_c(question: ProfileQuestion) -> float | None:
    if question.classification is None:
        return None
    known = upper_limit(question.classification, "classification")
    if known.kind != COMPONENT:
        raise InvalidInput(
            f"{known.key} is the limit of a {known.kind}, no classification of a component.",
            field="classification",
            remedy="Name a key of kind `component` from GET /v1/known-limits.",
        )
    return known.limit_c


def _bounds(asked: BoundsAsked, name: str) -> Bounds:
    low, high = asked.at_least, asked.at_most
    if low is None and high is None:
        raise InvalidInput(
            "Neither at_least nor at_most is given.", field=f"limits.{name}", remedy="Give one or both."
        )
    if low is not None and high is not None and low > high:
        raise InvalidInput(
            f"Nothing is at least {low:g} and at most {high:g}.",
            field=f"limits.{name}",
            remedy="Give an at_most that is not below at_least.",
        )
    return Bounds(low, high)
