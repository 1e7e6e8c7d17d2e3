"""The melting of an alloy of many elements, by minimising the Gibbs energy; kept, since it is costly."""

import threading
from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from functools import cached_property

from diagrams.alloys import Alloy
from diagrams.questions.lever import Equilibrium
from diagrams.questions.many_curve import FollowedCurve, follow
from diagrams.questions.many_edge import Edge, Passed, same_change
from diagrams.questions.many_place import check_served, place_many, prepared
from diagrams.questions.many_state import State, StateFinder
from diagrams.questions.melter import Melter, Method, Span, jump_at, liquid_up_to
from diagrams.questions.stored_spans import End, stored_span
from diagrams.questions.tolerance_box import Composition, box_of, span_over
from diagrams.sources import Source

BELOW_C = 1e-4  # where much melts at once, the state just below counts
MOST_KEPT = 64  # curves, and answers over the tolerance, of one alloy
GAIN_FRACTION = 1e-4  # a step of a search for liquid fractions that gains less is none


class ByMinimisation(Melter):
    """An alloy of a system of many elements."""

    method: Method = "minimisation"
    how_extremes = (
        "by search: nominal, corners, centre and middles of the tolerance, then passing mass from one "
        "element to another from the best of them, in ever smaller amounts"
    )

    def __init__(self, alloy: Alloy, *, keeping: bool = True) -> None:
        """`keeping` says whether spans that are stored are taken from there."""
        place = place_many(alloy)
        self.alloy, self.place = alloy, place
        self.data_id, self.edition = place.file.id, place.file.edition
        self.sources = tuple(Source(s["text"], s["how"], s["confidence"]) for s in place.file.sources)
        self.notes = place.file.notes
        self._box = box_of(alloy)
        wide = len(self._box.corners) > 1
        self.limits_wt = {el: pair for el, pair in alloy.limits_wt.items() if wide and el in alloy.elements}
        kept: tuple[tuple[tuple[str, float], End], ...] = (
            (("kept", 0.0), "solidus"),
            (("needed", 1.0), "liquidus"),
        )
        self._stored = {
            key: span
            for key, end in kept
            if keeping and (span := stored_span(alloy, self.data_id, self.edition, end)) is not None
        }
        self._lock = threading.RLock()
        self._curves: dict[tuple[tuple[str, float], ...], FollowedCurve] = {}
        self._spans: dict[tuple[str, float], Span] = {}

    @property
    def effort(self) -> int:
        """Corners of the tolerance times elements less one; about a second each, the first time."""
        return len(self._box.corners) * (len(self.alloy.composition_wt) - 1)

    @property
    def range_c(self) -> tuple[float, float]:
        """From what is stored, without the curve between."""
        if not self._stored:
            return super().range_c
        return self.kept(0.0).nominal, self.needed(1.0).nominal

    @cached_property
    def finder(self) -> StateFinder:
        """Finds states of the nominal composition."""
        return StateFinder(self.place, self.alloy.composition_wt)

    def range_near(self, near_c: tuple[float, float]) -> tuple[float, float]:
        """Without the curve between."""
        edge = Edge(near_c[0])
        solidus_c = edge.find(self.finder, lambda liquid: liquid > 0.0, fine=True)
        edge.guess_c = max(near_c[1], solidus_c)
        return solidus_c, edge.find(self.finder, lambda liquid: liquid >= 1.0, fine=True)

    @property
    def curve(self) -> FollowedCurve:
        """The melting curve at the nominal composition."""
        return self._curve_of(self._box.composition(self._box.nominal))

    def equilibrium(self, temperature_c: float) -> Equilibrium:
        """Of the nominal composition."""
        return self.finder.equilibrium(temperature_c)

    def liquid_fractions(self, temperatures_c: Sequence[float]) -> list[float | None]:
        """From the curve."""
        return [self.curve.liquid_fraction(t) for t in temperatures_c]

    def liquid_up_to(self, temperature_c: float) -> float | None:
        """None beyond the data."""
        return liquid_up_to(self.curve, temperature_c)

    def most_liquid_up_to(self, temperature_c: float) -> float | None:
        """By search over the tolerance, just below the temperature."""
        low, high = self.place.temperature_range_c
        if not low <= temperature_c <= high:
            return None
        just_below_c = max(low, temperature_c - BELOW_C)
        near: State | None = None

        def reached(composition: Composition) -> float:
            nonlocal near
            finder = self._finder_of(composition)
            fitting = near is not None and near.states.mu.shape[1] == len(finder.elements)
            near = finder.at(just_below_c, near if fitting else None)
            return near.liquid

        key = ("most", temperature_c)
        return self._span(key, lambda: span_over(self._box, reached, GAIN_FRACTION)).highest

    def needed(self, fraction: float) -> Span:
        """By search over the tolerance, unless it is stored."""
        if (span := self._stored.get(("needed", fraction))) is not None:
            return span
        nominal_c = self.curve.stays_above(fraction)
        return self._edges(("needed", fraction), nominal_c, lambda liquid: liquid >= fraction)

    def kept(self, fraction: float) -> Span:
        """By search over the tolerance, unless it is stored."""
        if (span := self._stored.get(("kept", fraction))) is not None:
            return span
        nominal_c = self.curve.first_exceeds(fraction)
        return self._edges(("kept", fraction), nominal_c, lambda liquid: liquid > fraction)

    def jump(self, temperature_c: float, composition_wt: Mapping[str, float]) -> float:
        """Of the alloy with this composition."""
        return jump_at(self._curve_of(composition_wt), temperature_c)

    def molten_at(self, temperature_c: float) -> bool | None:
        """One state tells as much as the liquidus itself, and costs far less."""
        low, high = self.place.temperature_range_c
        looked_c = min(max(temperature_c, low), high)
        molten = self.finder.at(looked_c).liquid >= 1.0
        if looked_c == temperature_c:
            return molten
        return molten if molten is (looked_c < temperature_c) else None

    def _edges(self, key: tuple[str, float], nominal_c: float, passed: Passed) -> Span:
        edge = Edge(nominal_c)
        nominal = self._box.composition(self._box.nominal)
        # first and last liquid come and go with a change of phases, which Newton's method finds again
        change = self.curve.change_at(nominal_c) if key[1] in (0.0, 1.0) else None

        def question(composition: Composition, fine: bool = False) -> float:
            if composition == nominal:
                return nominal_c
            finder = self._finder_of(composition)
            found_c = None if change is None else same_change(finder, change)
            return edge.find(finder, passed, fine) if found_c is None else found_c

        def finely(value_c: float, at: Composition) -> float:
            edge.guess_c = value_c
            return question(at, fine=True)

        def search() -> Span:
            found = span_over(self._box, question)
            low, high = found.lowest_at or nominal, found.highest_at or nominal
            lowest = min(nominal_c, finely(found.safe_low, low))
            return replace(found, lowest=lowest, highest=max(nominal_c, finely(found.safe_high, high)))

        return self._span(key, search)

    def _span(self, key: tuple[str, float], search: Callable[[], Span]) -> Span:
        with self._lock:
            if key not in self._spans:
                while len(self._spans) >= MOST_KEPT:
                    self._spans.pop(next(iter(self._spans)))
                self._spans[key] = search()
            return self._spans[key]

    def _finder_of(self, composition_wt: Composition) -> StateFinder:
        place = prepared(tuple(composition_wt))
        check_served(place.file, composition_wt)
        return StateFinder(place, composition_wt)

    def _curve_of(self, composition_wt: Composition) -> FollowedCurve:
        key = tuple(composition_wt.items())
        with self._lock:
            if key not in self._curves:
                while len(self._curves) >= MOST_KEPT:
                    self._curves.pop(next(iter(self._curves)))
                self._curves[key] = follow(self._finder_of(composition_wt))
            return self._curves[key]
