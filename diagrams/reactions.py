"""What the trade calls an invariant, and its reaction on cooling."""

from diagrams.events import Event
from diagrams.gibbs import Compound

# (reactants are liquid, products are liquid) -> name; usual terms of phase-diagram texts (common practice)
DECOMPOSITIONS = {
    (1, 0): "eutectic",
    (1, 1): "monotectic",
    (0, 0): "eutectoid",
    (0, 1): "metatectic",
}
FORMATIONS = {(1, 0): "peritectic", (0, 0): "peritectoid", (2, 0): "syntectic", (1, 1): "peritectic"}


def describe(event: Event, names: list[str]) -> tuple[str, str]:
    """Kind and reaction of an event, given the names of its phases from left to right."""
    phases = [phase for phase, _ in event.points]
    if event.kind == "three-phase":
        liquid = [int(phase.kind == "liquid") for phase in phases]
        left, middle, right = names
        if len(event.above) == 2:  # on cooling the middle phase falls apart
            kind = DECOMPOSITIONS[liquid[1], min(1, liquid[0] + liquid[2])]
            if kind == "eutectoid" and phases[1] in (phases[0], phases[2]):
                kind = "monotectoid"
            return kind, f"{middle} -> {left} + {right}"
        kind = FORMATIONS[liquid[0] + liquid[2], liquid[1]]
        first, second = (left, right) if liquid[0] >= liquid[2] else (right, left)
        return kind, f"{first} + {second} -> {middle}"
    if event.kind == "congruent":
        compound = next((k for k in (0, 1) if isinstance(phases[k], Compound)), None)
        hot, cold = (0, 1) if event.below else (1, 0)
        if compound is not None or phases[cold].kind == phases[hot].kind:
            return "congruent", f"{names[hot]} -> {names[cold]}"
        extremum = "minimum" if event.above else "maximum"
        return f"congruent {extremum}", f"{names[hot]} -> {names[cold]}"
    if event.kind == "critical":
        return "critical point", f"{names[0]} = {names[1]}"
    if event.kind == "transformation":
        return "transformation", f"{names[2]} -> {names[1]}"
    hot, cold = (0, 1) if phases[0].kind == "liquid" else (1, 0)
    if phases[0].kind == phases[1].kind:
        return "transformation", f"{names[0]} = {names[1]}"
    congruent = any(isinstance(p, Compound) and 0.0 < p.x < 1.0 for p in phases)
    return "congruent" if congruent else "melting point", f"{names[hot]} -> {names[cold]}"
