"""Finds which elements a request speaks of, so that even its error answers carry the right cautions."""

import re
from urllib.parse import unquote_plus

from diagrams.elements import MOLAR_MASS
from diagrams.fillers import match_filler

_SYMBOL = re.compile(rb"(%s)(?![a-z])" % "|".join(sorted(MOLAR_MASS, key=len, reverse=True)).encode())
_DIAGRAM_ID = re.compile(r"/diagrams/([a-z]{1,2}(?:-[a-z]{1,2})+)(?![a-z])")


_IN_BODY = re.compile(rb'"(?:designation|alloy)"\s*:\s*"([^"]{1,200})"')
_IN_ADDRESS = re.compile(r"(?:/fillers/|[?&]alloy=)([^/?&]{1,200})")
_MOST_DESIGNATIONS = 50


def elements_mentioned(address: str, body: bytes) -> frozenset[str]:
    """Return the elements named in an address (path?query) or a body, by symbol, diagram or designation.

    This serves cautions only, so rather one too many than one too few.
    """
    address = unquote_plus(address)
    symbols = {found.decode() for found in _SYMBOL.findall(address.encode("utf-8", "replace") + b" " + body)}
    for diagram in _DIAGRAM_ID.findall(address):
        symbols |= {part.capitalize() for part in diagram.split("-")} & MOLAR_MASS.keys()
    names = [found.decode("utf-8", "replace") for found in _IN_BODY.findall(body)[:_MOST_DESIGNATIONS]]
    for name in names + _IN_ADDRESS.findall(address)[:_MOST_DESIGNATIONS]:
        if (filler := match_filler(name)) is not None:
            symbols |= filler.composition_wt.keys()
    return frozenset(symbols)
