"""Which fillers would do for a joint, the widest window first, and why the others would not.

Where the filler need only be partly liquid, those of three and more elements take seconds each to compute.
Then the most promising by their printed melting ranges are computed, and the others are judged by what is
printed, which their answer says. Which are computed depends on the question alone.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace

from diagrams.errors import DiagramsError, NotConverged, OutsideData
from diagrams.fillers import Filler
from diagrams.units import celsius_to_kelvin, kelvin_to_celsius
from service.process.effort import MOST_COMPUTED
from service.process.placed import Placed, placed, printed
from service.process.sensors import FIELD as SENSOR_CLASS
from service.process.suitability import Suits, suits
from service.process.upper_limits import UpperKnown
from service.process.window import Demands, Window, find_window
from service.process.window_terms import UpperLimit, limit_term
from service.schemas.alloy import AlloyAsked

MOST_SEARCHED = 24  # of effort: three with tolerances for two of three elements
MOST_SUPERHEAT = "most superheat"
SLACK_C = 40.0  # printed and computed melting ranges differ by less, but for a few rows in a hundred


@dataclass(frozen=True)
class Wanted:
    """What is asked of a filler; `banned` are elements, `unwanted` names of fillers."""

    demands: Demands
    bases: tuple[UpperKnown, ...] = ()
    service_c: float | None = None
    most_homologous: float | None = None
    class_: str | None = None
    standard: str | None = None
    banned: frozenset[str] = frozenset()
    unwanted: frozenset[str] = frozenset()
    most_superheat_c: float = 0.0


@dataclass(frozen=True)
class Exclusion:
    """Why a filler would not do; `by_c` degrees are missing where it is a matter of degrees."""

    code: str
    text: str
    by_c: float | None = None


@dataclass(frozen=True, eq=False)
class Candidate:
    """A filler looked at: its window, what keeps it off the list, and whether its print alone was used."""

    filler: Filler
    subject: Placed
    window: Window
    solidus_c: float
    homologous: float | None
    practice: tuple[Suits, ...]
    exclusions: tuple[Exclusion, ...]
    by_print: bool

    @property
    def width_c(self) -> float:
        """Of its window, °C; one that is open above is the widest."""
        return float("inf") if self.window.width_c is None else self.window.width_c


@dataclass(frozen=True, eq=False)
class Shortlist:
    """Those that would do, the widest window first, and those that would not, in the order given."""

    ranked: tuple[Candidate, ...]
    excluded: tuple[tuple[Filler, tuple[Exclusion, ...]], ...]


def shortlist(chosen: Sequence[Filler], wanted: Wanted) -> Shortlist:
    """Look at fillers; raises what `find_window` raises about anything but the filler."""
    for limit in wanted.demands.upper_limits:
        limit_term(limit, wanted.demands.budget)  # a sensor that cannot serve a limit is no filler's fault
    excluded: dict[str, tuple[Exclusion, ...]] = {}
    left = []
    for filler in chosen:
        kept_off = _kept_off(filler, wanted)
        if kept_off:
            excluded[filler.name] = tuple(kept_off)
        else:
            left.append(filler)
    by_print = _left_to_print(left, wanted)
    found = []
    for filler in left:
        looked = _look(filler, wanted, by_print=filler.name in by_print)
        if isinstance(looked, Exclusion):
            excluded[filler.name] = (looked,)
        elif looked.exclusions:
            excluded[filler.name] = looked.exclusions
        else:
            found.append(looked)
    found.sort(key=lambda candidate: (-round(candidate.width_c, 6), candidate.filler.name))
    return Shortlist(tuple(found), tuple((f, excluded[f.name]) for f in chosen if f.name in excluded))


def _kept_off(filler: Filler, wanted: Wanted) -> list[Exclusion]:
    """What needs no window to be seen."""
    found = []
    if wanted.class_ is not None and filler.class_ != wanted.class_:
        found.append(Exclusion("class", f"It is a {filler.class_}, and a {wanted.class_} is wanted."))
    if wanted.standard is not None and wanted.standard not in filler.designations:
        found.append(Exclusion("standard", f"{wanted.standard} does not list it."))
    if filler.name in wanted.unwanted:
        found.append(Exclusion("banned", "It is not wanted."))
    allowed = {el for el, (_, highest) in filler.limits_wt.items() if highest > 0.0}
    for el in sorted(wanted.banned & (filler.composition_wt.keys() | allowed)):
        held = filler.composition_wt.get(el)
        told = f"It holds {held:g} wt% {el}" if held else f"Its standard allows {el} in it"
        found.append(Exclusion("banned", f"{told}, which is barred."))
    found += [Exclusion("practice", s.text) for s in suits(filler, wanted.bases) if s.verdict == "barred"]
    return found


def _left_to_print(fillers: Sequence[Filler], wanted: Wanted) -> frozenset[str]:
    """The names of those that are judged by their print: hopeless ones, and those past the effort allowed."""
    if wanted.demands.target_liquid_fraction >= 1.0:
        return frozenset()  # where a filler begins and ends to melt is kept
    promising: list[tuple[float, Filler, int]] = []
    kept_to_print = set()
    for filler in fillers:
        effort = _effort(filler)
        if effort == 0:
            continue
        looked = _look(filler, wanted, by_print=True)
        partly_c = (1.0 - wanted.demands.target_liquid_fraction) * (filler.liquidus_c - filler.solidus_c)
        if isinstance(looked, Exclusion) or _missing_c(looked) > SLACK_C + partly_c:
            kept_to_print.add(filler.name)
        else:
            promising.append((looked.width_c + partly_c, filler, effort))
    promising.sort(key=lambda each: (-each[0], each[1].name))
    total = 0
    for count, (_, filler, effort) in enumerate(promising):
        total += effort
        if count >= MOST_COMPUTED or total > MOST_SEARCHED:
            kept_to_print.add(filler.name)
    return frozenset(kept_to_print)


def _effort(filler: Filler) -> int:
    try:
        return placed(AlloyAsked(designation=filler.name)).melter.effort
    except DiagramsError:
        return 0


def _missing_c(looked: Candidate) -> float:
    return max((exclusion.by_c or 0.0 for exclusion in looked.exclusions), default=0.0)


def _look(filler: Filler, wanted: Wanted, *, by_print: bool) -> Candidate | Exclusion:
    """A filler with its window, or why no window can be told."""
    try:
        subject = printed(filler) if by_print else placed(AlloyAsked(designation=filler.name))
        window = find_window(subject, _demands_on(subject, wanted), "", seeing_joints=False)
        solidus_c = subject.melter.kept(0.0).safe_low
    except (OutsideData, NotConverged) as error:
        if error.field == SENSOR_CLASS:
            return Exclusion("sensor-class", str(error))
        if error.field.startswith("earlier_joints"):
            raise
        return Exclusion("no-data", str(error))
    homologous = None if wanted.service_c is None else _homologous(wanted.service_c, solidus_c)
    return Candidate(
        filler=filler,
        subject=subject,
        window=window,
        solidus_c=solidus_c,
        homologous=homologous,
        practice=tuple(suits(filler, wanted.bases)),
        exclusions=tuple(_excluded(window, wanted, solidus_c, homologous, by_print)),
        by_print=by_print,
    )


def _demands_on(subject: Placed, wanted: Wanted) -> Demands:
    """A filler without a brazing range is kept from overheating by the superheat that is usual at most."""
    row = subject.alloy.filler
    if row is None or row.brazing_range_c is not None:
        return wanted.demands
    liquidus_c = subject.melter.needed(1.0).nominal
    told = (
        f"{row.name} is all liquid from {liquidus_c:.2f} °C on, and at most {wanted.most_superheat_c:g} °C "
        "more are wanted: nothing else tells how hot it may get."
    )
    limit = UpperLimit(MOST_SUPERHEAT, liquidus_c + wanted.most_superheat_c, told=told)
    return replace(wanted.demands, upper_limits=(*wanted.demands.upper_limits, limit))


def _homologous(service_c: float, solidus_c: float) -> float:
    return celsius_to_kelvin(service_c) / celsius_to_kelvin(solidus_c)


def _excluded(
    window: Window, wanted: Wanted, solidus_c: float, homologous: float | None, by_print: bool
) -> list[Exclusion]:
    how = " (not computed: by print or data, the less favourable)" if by_print else ""
    found = []
    if wanted.service_c is not None and solidus_c <= wanted.service_c:
        text = f"It begins to melt at {solidus_c:.1f} °C{how}, and gets {wanted.service_c:g} °C hot in use."
        found.append(Exclusion("service-temperature", text, wanted.service_c - solidus_c))
    elif homologous is not None and wanted.most_homologous is not None:
        lowest_c = kelvin_to_celsius(homologous * celsius_to_kelvin(solidus_c) / wanted.most_homologous)
        if homologous > wanted.most_homologous:
            text = (
                f"Its homologous service temperature is {homologous:.3f}{how}, the most wanted is "
                f"{wanted.most_homologous:g}: its solidus lies {lowest_c - solidus_c:.1f} °C too low."
            )
            found.append(Exclusion("homologous", text, lowest_c - solidus_c))
    if not window.feasible and window.collision is not None:
        found.append(Exclusion("no-window", f"{window.collision.text}{how}", window.collision.by_c))
    return found


def elements_of(candidates: Sequence[Candidate], demands: Demands) -> frozenset[str]:
    """What cautions have to speak of: fillers, earlier joints, and what the limits are of."""
    held = {el for c in candidates for el in (*c.filler.composition_wt, *c.filler.limits_wt)}
    return frozenset(held).union(
        *(joint.subject.elements for joint in demands.earlier_joints),
        *(limit.known.elements for limit in demands.upper_limits if limit.known is not None),
    )
