"""How the fields of a section are called: the liquid first, the solids in alphabetical order."""

from diagrams.diagram import RegionKind
from diagrams.many.newton import States
from diagrams.many.system import Fixed, Mixed
from diagrams.sections.line import Line

Named = tuple[str, RegionKind, str]  # name, kind, model


def phases_of(line: Line, states: States) -> list[Named]:
    """Name, kind and model of each phase, as they are in the middle of some states upwards."""
    system, row = line.sample.system, len(states.mu) // 2
    found: list[Named] = []
    for k, number in enumerate(states.sets):
        phase: Mixed | Fixed = system.phase(number)
        if isinstance(phase, Fixed):
            name = phase.name
        else:
            x = states.composition(system, k)[row]
            shares = dict(zip(system.elements, (x / x.sum()).tolist(), strict=True))
            name = phase.naming.name(shares, states.sets.count(number) == 1)
        found.append((name, "liquid" if phase.kind == "liquid" else "solid", phase.model))
    return sorted(found, key=lambda named: (named[1] != "liquid", named[0]))


def field_of(phases: list[Named]) -> str:
    """The field's name, such as `L + (Pb)`."""
    return " + ".join(name for name, _, _ in phases)
