"""How far the data behind a temperature may be off, judged by how far they were found to be off.

The evidence is the comparison with printed melting ranges. A filler that the table prints is judged by its
own row, and by the median of its system where that row agrees by luck; any other alloy by nine tenths of its
system's rows, by the worst of fewer than five; a system without rows by nine tenths of all of its kind.
Rows that went into a fit flatter the data, and the reason tells how many did.
"""

import statistics
from collections.abc import Sequence
from dataclasses import dataclass

from diagrams.comparison import DRAWN_THROUGH_PRINTS, Compared, compared, comparison_edition
from diagrams.questions.melter import Melter

SHARE = 0.9
FEW = 5  # rows that make no nine tenths
ROUNDED_C = 0.5  # prints are whole degrees: no row can prove better than this
PRINTED = "standard table"


@dataclass(frozen=True)
class DataUncertainty:
    """A size, °C, and what it rests on; `known` is false where nothing was ever compared."""

    value_c: float
    reason: str
    known: bool = True


def data_uncertainty(melter: Melter, fraction: float) -> DataUncertainty:
    """Of the temperature at which a fraction (0..1) is liquid.

    0 is judged by the solidus, 1 by the liquidus, what lies between by the greater of both.
    """
    filler = melter.alloy.filler
    printed = [row for row in compared() if filler is not None and row.filler == filler.name]
    if melter.method == PRINTED and not printed:
        reason = "Printed temperatures stand in for data; how far they are off was never compared: 0 counted."
        return DataUncertainty(0.0, reason, known=False)
    if melter.data_id in DRAWN_THROUGH_PRINTS:
        reason = f"{melter.data_id} is drawn through printed temperatures, which cannot check it: 0 counted."
        return DataUncertainty(0.0, reason, known=False)
    data_id = printed[0].data_id if printed else melter.data_id
    own = [row for row in compared() if row.data_id == data_id]
    alike = [row for row in compared() if _is_many(row.data_id) is _is_many(data_id)]
    ends = ("solidus",) if fraction <= 0.0 else ("liquidus",) if fraction >= 1.0 else ("solidus", "liquidus")
    if printed:
        sizes = {end: max(*_off(printed, end), statistics.median(_off(own, end))) for end in ends}
        based = f"computed less printed for this filler, at least the median of {_counted(own)} of these data"
    elif len(own) >= FEW:
        sizes = {end: _nine_tenths(_off(own, end)) for end in ends}
        based = f"nine tenths of {_counted(own)} of these data lie within it"
    elif own:
        sizes = {end: max(*_off(own, end), statistics.median(_off(alike, end))) for end in ends}
        based = f"the worst of {_counted(own)} of these data, at least the median of {_counted(alike)} of all"
    else:
        sizes = {end: _nine_tenths(_off(alike, end)) for end in ends}
        based = f"no print checks these data; nine tenths of {_counted(alike)} of other data lie within it"
    end, size_c = max(sizes.items(), key=lambda item: item[1])
    value_c = max(size_c, ROUNDED_C)
    least = f", {ROUNDED_C:g} °C at least" if value_c > size_c else ""
    return DataUncertainty(
        value_c,
        f"The {end} of the data may be off by {value_c:.2f} °C: {based}{least} ({comparison_edition()}).",
    )


def _is_many(data_id: str) -> bool:
    """Whether a system of three and more elements is meant."""
    return data_id.count("-") > 1


def _off(rows: Sequence[Compared], end: str) -> list[float]:
    return sorted(abs(row.solidus_off_c if end == "solidus" else row.liquidus_off_c) for row in rows)


def _nine_tenths(sizes: Sequence[float]) -> float:
    """Linear between the sorted sizes."""
    place = SHARE * (len(sizes) - 1)
    k = int(place)
    return sizes[k] if k + 1 == len(sizes) else sizes[k] + (place - k) * (sizes[k + 1] - sizes[k])


def _counted(rows: Sequence[Compared]) -> str:
    """How many, and how many of them a fit was aimed at."""
    used = sum(row.used_in_fit for row in rows)
    fitted = f" ({used} used in fits)" if used else ""
    return f"{len(rows)} filler{'s' if len(rows) != 1 else ''}{fitted}"
