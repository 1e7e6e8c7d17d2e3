"""Finds which elements a request speaks of, so that even its error answers carry the right cautions."""

import json
import re
from itertools import islice
from urllib.parse import unquote_plus

from diagrams.elements import MOLAR_MASS
from diagrams.fillers import match_filler

# The cautions on lead must never be missing, so lead is looked for everywhere and in any spelling; other
# elements in their usual spelling everywhere, in other spellings and as parts of names near the beginning.
_NEAR_BEGINNING = 100_000
_MOST_NAMES = 500
_SYMBOLS = {el: re.compile(rb"%s(?![a-z])" % el.encode()) for el in MOLAR_MASS}
_WORDS = {
    "Pb": (b"lead", re.compile(rb"\blead(?:ed)?\b")),
    "Cd": (b"cadmium", re.compile(rb"\bcadmium\b")),
    "Zn": (b"zinc", re.compile(rb"\bzinc\b")),
}
# “sn40pb”, “63sn-37pb”, “ag-cu”: nothing but symbols, with digits or dashes. Possessive, so that no text is
# tried in more than one way.
_ANY_SYMBOL = "|".join(sorted((el.lower() for el in MOLAR_MASS), key=len, reverse=True)).encode()
_RUN = re.compile(
    rb"(?<![a-z0-9.])(?=[a-z]*[0-9\-])[0-9.]*+(?:(?>%s)[0-9.\-]*+){1,30}+(?![a-z])" % _ANY_SYMBOL
)
_PART = re.compile(_ANY_SYMBOL)
_IN_BODY = re.compile(rb'"(?:designation|alloy|from_alloy|to_alloy)"\s*:\s*"?([^",\]}]{1,100})')
_IN_ADDRESS = re.compile(r"(?:/fillers/|[?&][a-z_]*alloy=)([^/?&]{1,200})")


def elements_mentioned(address: str, body: bytes) -> frozenset[str]:
    """Return the elements named in an address (path?query) or a body, by symbol, diagram or designation.

    This serves cautions only, so rather one too many than one too few. The work grows with the size of the
    body and no faster.
    """
    address = unquote_plus(address)
    text = address.encode("utf-8", "replace") + b"\n" + _unescaped(body)
    lower = text.lower()
    found = {el for el, pattern in _SYMBOLS.items() if el.encode() in text and pattern.search(text)}
    found |= {el for el, (word, pattern) in _WORDS.items() if word in lower and pattern.search(lower)}
    if b"pb" in lower:
        found.add("Pb")
    for run in _RUN.finditer(lower[:_NEAR_BEGINNING]):
        found |= {part.decode().capitalize() for part in _PART.findall(run[0])}
    return frozenset(found | _elements_of_names(address, text))


def _elements_of_names(address: str, text: bytes) -> set[str]:
    """The elements of every designation given, which need not show them: Ag 345 holds cadmium."""
    names = set(_IN_ADDRESS.findall(address)[:_MOST_NAMES])
    for found in islice(_IN_BODY.finditer(text), _MOST_NAMES):
        names.add(found[1].decode("utf-8", "replace").strip())
    fillers = [filler for filler in map(match_filler, names) if filler is not None]
    return {el for filler in fillers for el in (*filler.composition_wt, *filler.limits_wt)}


def _unescaped(body: bytes) -> bytes:
    r"""The body with escapes such as `P\u0062` written out, if it is JSON; else as it is, without zeros."""
    if b"\\u" in body:
        try:
            return json.dumps(json.loads(body), ensure_ascii=False).encode("utf-8", "replace")
        except (ValueError, RecursionError):
            pass  # will be refused
    return body.replace(b"\0", b"")
