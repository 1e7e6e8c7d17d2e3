"""A table, with its address line or with a question beside it, as the body they stand for."""

from collections.abc import Mapping
from typing import Any

import numpy as np

from diagrams.alloys import parse_alloy
from diagrams.errors import InvalidInput
from service.process.profiles.table import channels_from
from service.process.profiles.trace import Floats
from service.schemas.address import tolerance_of
from service.schemas.profile_address import ProfileAddress
from service.schemas.profile_words import REPAIRS

_SAME = (
    "target_liquid_fraction",
    "superheat_c",
    "sensor_tolerance_c",
    "sensor_class",
    "spread_c",
    "data_tolerance_c",
    "count_data",
    "combination",
    "standard_profile",
    "classification",
    "readings_are_celsius",
)
_WINDOW = ("minimum_peak_c", "maximum_peak_c")


def body_of(address: ProfileAddress, table: str) -> dict[str, Any]:
    """The columns of the table as sensors, the rest from the address; InvalidInput names the field."""
    if address.alloy is None:
        raise InvalidInput(
            "The address names no alloy.", field="alloy", remedy="Add alloy=Sn63Pb37 or the like."
        )
    given = address.model_dump(exclude_none=True)
    body: dict[str, Any] = {field: given[field] for field in _SAME if field in given}
    if window := {field: given[field] for field in _WINDOW if field in given}:
        body["window"] = window
    limits = []
    if address.limit_c is not None:
        limits.append({"name": "limit", "limit_c": address.limit_c})
    if address.known_limit is not None:
        limits.append({"name": "known limit", "known": address.known_limit})
    if limits:
        body["upper_limits"] = limits
    if address.repairs is not None:
        body["repairs"] = _repairs(address.repairs)
    body["alloy"] = _alloy(address.alloy, address.tolerance_wt)
    return body | _columns(table)


def body_with(question: Mapping[str, Any], table: str) -> dict[str, Any]:
    """The columns of the table as sensors of a question, which may say of each by its name where it sits.

    Raises InvalidInput for a question that brings columns of its own or speaks of sensors the table lacks.
    """
    if "time_s" in question:
        raise InvalidInput(
            "The times stand in the table.", field="time_s", remedy="Leave time_s out of the question."
        )
    columns = _columns(table)
    named = {sensor["name"]: sensor for sensor in columns["sensors"]}
    asked = question.get("sensors", [])
    if not isinstance(asked, list) or not all(isinstance(about, dict) for about in asked):
        return dict(question)  # the schema says what is wrong with it
    for k, about in enumerate(asked):
        for column in ("time_s", "temperature_c"):
            if column in about:
                raise InvalidInput(
                    "The columns stand in the table.",
                    field=f"sensors.{k}.{column}",
                    remedy="Say of a sensor here only what the table cannot: name, on, limit_c.",
                )
        sensor = named.pop(about.get("name"), None) if isinstance(about.get("name"), str) else None
        if sensor is None:
            raise InvalidInput(
                f"The table has no column “{str(about.get('name'))[:60]}”, or it stands here twice.",
                field=f"sensors.{k}.name",
                remedy=f"Name a column: {', '.join(one['name'] for one in columns['sensors'][:20])}.",
            )
        sensor.update(about)
    return {**question, **columns}


def _columns(table: str) -> dict[str, Any]:
    channels = channels_from(table)
    sensors = [{"name": c.name, "temperature_c": _plain(c.temperature_c)} for c in channels]
    return {"time_s": channels[0].time_s.tolist(), "sensors": sensors}


def _alloy(text: str, tolerance_text: str | None) -> dict[str, Any]:
    alloy, tolerance = parse_alloy(text), tolerance_of(tolerance_text)
    named: dict[str, Any] = {"designation": text}
    if alloy.filler is None:
        named = {"composition_wt": dict(alloy.composition_wt)}
    return named if tolerance is None else {**named, "tolerance_wt": dict(tolerance)}


def _plain(readings: Floats) -> list[float | None]:
    held = np.isfinite(readings).tolist()
    return [reading if there else None for reading, there in zip(readings.tolist(), held, strict=True)]


def _repairs(text: str) -> list[str]:
    found = [" ".join(part.split()) for part in text.split(",")]
    for repair in found:
        if repair not in REPAIRS:
            raise InvalidInput(
                f"“{repair[:60]}” is no repair.",
                field="repairs",
                remedy=f"Name any of: {', '.join(REPAIRS)}.",
            )
    return found
