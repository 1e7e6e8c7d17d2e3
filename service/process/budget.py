"""The uncertainty budget: what a bound on a reading gains as alloy, data and sensor are not exactly known.

The same budget serves the window, the check of a recorded run and the step plan. All of it added up is the
worst case. The root of the sum of the squares is what independent errors seldom exceed together, but may.
The spread between coldest and hottest joint is no error but a difference that is there in every run: it
enters whole, either way.
"""

import math
from dataclasses import dataclass

from diagrams.questions.melter import Melter, Span
from service.process.data_uncertainty import data_uncertainty
from service.process.sensors import Sensor, Stated
from service.process.window_parts import Part
from service.schemas.uncertainty_words import WORST_CASE, Combination

EXACT = Stated(0.0)
ALLOY, DATA, SENSOR = "alloy tolerance", "data", "sensor tolerance"


@dataclass(frozen=True)
class Budget:
    """How errors are counted; `data_c` None: as the comparison with prints tells, for each alloy."""

    sensor: Sensor = EXACT
    data_c: float | None = 0.0
    combination: Combination = WORST_CASE

    def above(self, span: Span, melter: Melter, fraction: float, asked_c: float) -> tuple[Part, ...]:
        """Sizes that a lower bound on the true temperature gains as a bound on the reading.

        `asked_c` (°C) is what is asked for on top of the temperature of the fraction.
        """
        alloy, data = _alloy(span, span.safe_high - span.nominal), self._data(melter, fraction)
        hottest_c = span.nominal + alloy.value_c + data.value_c + asked_c
        return alloy, data, self.read_high(hottest_c)

    def below(self, span: Span, melter: Melter, fraction: float, margin_c: float) -> tuple[Part, ...]:
        """Sizes that an upper bound loses; the sensor's is that of the highest temperature meant."""
        alloy, data = _alloy(span, span.nominal - span.safe_low), self._data(melter, fraction)
        return alloy, data, self.read_low(span.nominal - margin_c)

    def read_high(self, true_c: float) -> Part:
        """By how much a reading may lie above a true temperature."""
        return self._sensor(true_c, "above")

    def read_low(self, true_c: float) -> Part:
        """By how much a reading may lie below a true temperature; beyond the end of its class, below that."""
        return self._sensor(min(true_c, self.sensor.top_c), "below")

    @property
    def highest_reading_c(self) -> float:
        """The highest reading that tells anything: at the end of its class a sensor may read low."""
        top_c = self.sensor.top_c
        return top_c if math.isinf(top_c) else top_c - self.sensor.tolerance_c(top_c)

    def _sensor(self, true_c: float, side: str) -> Part:
        size_c, told = self.sensor.tolerance_c(true_c), self.sensor.told
        origin = f" at {true_c:.1f} °C ({told})" if told else ""
        reason = f"A reading may lie {size_c:.6g} °C {side} the true temperature{origin}."
        return Part(SENSOR, size_c, reason if size_c else "Readings are taken to be exactly right.")

    def _data(self, melter: Melter, fraction: float) -> Part:
        if self.data_c is None:
            found = data_uncertainty(melter, fraction)
            return Part(DATA, found.value_c, found.reason)
        reason = f"The data are taken to be off by {self.data_c:g} °C at most, as stated."
        return Part(DATA, self.data_c, reason if self.data_c else "The data are taken to be exactly right.")


NO_ERRORS = Budget()


def _alloy(span: Span, size_c: float) -> Part:
    if span.lowest is None or span.highest is None:
        return Part(ALLOY, 0.0, "What its tolerance may change is not known: none counted.")
    reason = f"The least favourable composition in tolerance lies {size_c:.2f} °C from the nominal one."
    return Part(ALLOY, size_c, reason if size_c else "No composition in tolerance is less favourable.")
