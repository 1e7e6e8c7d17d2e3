"""Upper limits that need not be typed."""

from service.process.upper_limits import known_limits_shown
from service.routes.strict import new_router
from service.schemas.known_limits import KnownLimitsAnswer

router = new_router("Window")


@router.get("/known-limits", summary="Stored upper limits")
async def list_known_limits() -> KnownLimitsAnswer:
    """List the limits that a window takes by key: base metals, components, fluxes.

    The figures are for guidance, each with its source; data sheets and the standard in force decide.
    """
    return known_limits_shown()
