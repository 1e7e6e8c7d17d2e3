"""Parameters of the address line that several questions share."""

from typing import Annotated

from fastapi import Query

from diagrams.questions.traces import MOST_TRACE_WT
from service.schemas.address import LONGEST_LIST, TOLERANCE
from service.schemas.alloy import TRACES
from service.schemas.base import Finite

AlloyText = Annotated[
    str,
    Query(
        min_length=1,
        max_length=200,
        description="A designation (`Sn63Pb37`, `BAg-8`), or element symbols with mass percent where one "
        "element may be left open and takes the balance (`Sn60Pb`).",
        examples=["Sn63Pb37"],
    ),
]
TracesQuery = Annotated[
    Finite | None, Query(gt=0, le=MOST_TRACE_WT, alias="leave_out_traces_below_wt", description=TRACES)
]
ToleranceQuery = Annotated[
    str | None,
    Query(
        min_length=1,
        max_length=LONGEST_LIST,
        alias="tolerance_wt",
        description=TOLERANCE,
        examples=["Sn:0.5,Pb:0.5"],
    ),
]
TemperaturesQuery = Annotated[
    str | None,
    Query(
        min_length=1,
        max_length=LONGEST_LIST,
        alias="temperatures_c",
        description="Temperatures, °C, divided by commas, at which the liquid fraction is wanted; each must "
        "lie in the `temperature_range_c` of the data. For very many, POST.",
        examples=["185,200,220"],
    ),
]
TemperatureQuery = Annotated[Finite, Query(description="Temperature, °C.", examples=[190])]
