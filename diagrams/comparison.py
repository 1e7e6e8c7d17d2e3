"""How far computed melting ranges lie from printed ones: every computed filler held against its print.

Stored as a table, so that an answer can say how good its data were found to be without computing a hundred
alloys; `python -m diagrams.fitting.compare` writes it anew.
"""

from dataclasses import dataclass
from functools import cache

from diagrams.reference import reference_edition, reference_table

TABLE = "comparison.csv"
DRAWN_THROUGH_PRINTS = frozenset({"ag-pd", "in-pb", "sb-sn"})  # diagrams that no print can check
COLUMNS = ("filler", "data", "solidus_off_c", "liquidus_off_c", "used_in_fit")


@dataclass(frozen=True)
class Compared:
    """One filler: computed less printed, °C; `data_id` names the diagram or system it was computed from.

    `used_in_fit`: its print was an aim of a fit, so that it says less than one that was not.
    """

    filler: str
    data_id: str
    solidus_off_c: float
    liquidus_off_c: float
    used_in_fit: bool


@cache
def compared() -> tuple[Compared, ...]:
    """The stored table."""
    return tuple(
        Compared(
            row["filler"],
            row["data"],
            float(row["solidus_off_c"]),
            float(row["liquidus_off_c"]),
            row["used_in_fit"] == "yes",
        )
        for row in reference_table(TABLE)
    )


def comparison_edition() -> str:
    """Edition of the stored table."""
    return reference_edition(TABLE)
