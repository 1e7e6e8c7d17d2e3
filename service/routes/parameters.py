"""Parameters of the address line that several questions share."""

from typing import Annotated

from fastapi import Query

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
TemperatureQuery = Annotated[Finite, Query(description="Temperature, °C.", examples=[190])]
