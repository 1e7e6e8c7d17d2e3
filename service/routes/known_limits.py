"""Limits and tolerances that need not be typed."""

from service.process.sensors import sensor_classes_shown
from service.process.upper_limits import known_limits_shown
from service.routes.strict import new_router
from service.schemas.known_limits import KnownLimitsAnswer
from service.schemas.uncertainty import SensorClassesAnswer

router = new_router("Window")


@router.get("/known-limits", summary="Stored upper limits")
async def list_known_limits() -> KnownLimitsAnswer:
    """List the limits that a window takes by key: base metals, components, fluxes.

    The figures are for guidance, each with its source; data sheets and the standard in force decide.
    """
    return known_limits_shown()


@router.get("/sensor-classes", summary="Stored classes of thermocouples")
async def list_sensor_classes() -> SensorClassesAnswer:
    """List the classes of IEC 60584 and ASTM E230 that `sensor_class` takes, with their tolerances.

    They hold for new sensors; a used one drifts, and its calibration decides.
    """
    return sensor_classes_shown()
