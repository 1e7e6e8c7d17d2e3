"""The address of the cautions on what was asked about, for the `Link` header of every answer."""

import re
from functools import lru_cache
from urllib.parse import parse_qsl, quote

from diagrams.alloys import parse_alloy
from diagrams.errors import DiagramsError

IN_GENERAL = "/v1/safety"
_LONGEST_TEXT = 200
_OF_ONE = re.compile(r"/v1/(diagrams|fillers)/([^/]+)")


def help_address(path: str, query: bytes, found: bool) -> str:
    """Return `/v1/safety`, with the alloy or diagram of a request to GET if it is a valid one.

    `path` is the decoded path, `query` the raw query; `found` tells whether the request was answered with
    what is at its address, which proves the id or designation in the path.
    """
    if b"alloy=" in query:
        texts = [value for name, value in parse_qsl(query.decode("latin-1")) if name == "alloy"]
        return _of_alloy(texts[0]) if len(texts) == 1 and len(texts[0]) <= _LONGEST_TEXT else IN_GENERAL
    if found and (named := _OF_ONE.search(path)):
        return f"{IN_GENERAL}?{'diagram' if named[1] == 'diagrams' else 'alloy'}={quote(named[2], safe='')}"
    return IN_GENERAL


@lru_cache(maxsize=4096)
def _of_alloy(text: str) -> str:
    try:
        parse_alloy(text)
    except DiagramsError:
        return IN_GENERAL
    return f"{IN_GENERAL}?alloy={quote(text, safe='')}"
