"""Reads JSON bodies without losing anything: a key given twice is refused, not overwritten."""

import json
from typing import Any

Path = tuple[str | int, ...]


class UnreadableJson(ValueError):
    """The body is no JSON; `place` is the line and column where reading stopped, from 1, if known."""

    def __init__(self, reason: str, place: tuple[int, int] | None = None) -> None:
        where = f" at line {place[0]}, column {place[1]}" if place else ""
        super().__init__(f"The body cannot be read as JSON: {reason}{where}.")
        self.place = place


class DuplicateKey(ValueError):
    """An object in the body has the same key twice; `path` leads to it."""

    def __init__(self, path: Path) -> None:
        super().__init__(f"“{path[-1]}” is given twice in the same object.")
        self.path = path


def read_json(body: bytes) -> Any:
    """Parse UTF-8 JSON; raise UnreadableJson or DuplicateKey.

    NaN, Infinity and numbers too large for a float come through as such: the models refuse them by field.
    """
    try:
        read = _DECODER.decode(body.decode("utf-8"))
        if b"\\u" in body:  # only an escape can bring half a surrogate pair, which no answer could repeat
            json.dumps(read, ensure_ascii=False).encode("utf-8")
        return read
    except _Twice:
        raise DuplicateKey(_duplicate_path(body)) from None
    except json.JSONDecodeError as error:
        raise UnreadableJson(error.msg.rstrip(":"), (error.lineno, error.colno)) from None
    except UnicodeDecodeError as error:
        before = body[: error.start]
        line, column = before.count(b"\n") + 1, error.start - (before.rfind(b"\n") + 1) + 1
        raise UnreadableJson("a byte that is no UTF-8", (line, column)) from None
    except UnicodeEncodeError:
        raise UnreadableJson("half of a surrogate pair") from None
    except RecursionError:
        raise UnreadableJson("brackets nested too deeply") from None
    except ValueError:  # Python reads no integer of more than 4300 digits
        raise UnreadableJson("a whole number with too many digits") from None


class _Twice(Exception):
    """Tells the fast pass to give way to the careful one."""


def _unique(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    made = dict(pairs)
    if len(made) != len(pairs):
        raise _Twice
    return made


_DECODER = json.JSONDecoder(object_pairs_hook=_unique)


class _Pairs(list[tuple[str, Any]]):
    """An object kept as its pairs, so that it can be told from an array."""


def _duplicate_path(body: bytes) -> Path:
    """Find the first doubled key; a second, slower reading that only bad bodies pay for."""
    waiting: list[tuple[Path, Any]] = [((), json.loads(body.decode("utf-8"), object_pairs_hook=_Pairs))]
    while waiting:
        path, value = waiting.pop(0)
        if isinstance(value, _Pairs):
            seen: set[str] = set()
            for key, inner in value:
                if key in seen:
                    return (*path, key)
                seen.add(key)
                waiting.append(((*path, key), inner))
        elif isinstance(value, list):
            waiting.extend(((*path, index), inner) for index, inner in enumerate(value))
    return ("",)
