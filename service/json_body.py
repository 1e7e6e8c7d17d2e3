"""Reads JSON bodies without losing anything: a key given twice is refused, not overwritten."""

import json
import re
from collections.abc import Iterator
from typing import Any

from pydantic_core import from_json

Path = tuple[str | int, ...]
MOST_KEYS = 100  # of one object; no question has as many, and each one too many would be an error to tell
# Of one body, counted by brackets and colons, even those inside texts; no question comes near.
LONG = 200_000  # bytes
MOST_BRACKETS = 10_000
MOST_COLONS = 100_000


class UnreadableJson(ValueError):
    """The body is no JSON; `place` is the line and column where reading stopped, from 1, if known."""

    def __init__(self, reason: str, place: tuple[int, int] | None = None) -> None:
        where = f" at line {place[0]}, column {place[1]}" if place else ""
        super().__init__(f"The body cannot be read as JSON: {reason}{where}.")
        self.place = place


class UnusableObject(ValueError):
    """An object in the body that no question can hold; `path` leads to it, `remedy` says what to do."""

    def __init__(self, path: Path, wrong: str, remedy: str) -> None:
        super().__init__(wrong)
        self.path = path
        self.remedy = remedy


class DuplicateKey(UnusableObject):
    """An object in the body has the same key twice; `path` leads to the key."""

    def __init__(self, path: Path) -> None:
        super().__init__(path, f"“{path[-1]}” is given twice in the same object.", "Give each key once.")


class TooManyObjects(UnusableObject):
    """The body has more than MOST_BRACKETS objects and lists, or more than MOST_COLONS fields."""

    def __init__(self) -> None:
        wrong = f"The body holds more than {MOST_BRACKETS} objects and lists or {MOST_COLONS} fields."
        super().__init__((), wrong, "Ask in smaller parts.")


class TooManyKeys(UnusableObject):
    """An object in the body has more than MOST_KEYS keys."""

    def __init__(self, path: Path) -> None:
        super().__init__(
            path,
            f"An object holds more than {MOST_KEYS} keys.",
            f"Leave out what is no field here: no object takes more than {MOST_KEYS}.",
        )


def read_json(body: bytes) -> Any:
    """Parse UTF-8 JSON; raise UnreadableJson, DuplicateKey, TooManyKeys or TooManyObjects.

    NaN, Infinity and numbers too large for a float come through as such: the models refuse them by field.
    """
    if body.startswith(b"\xef\xbb\xbf"):
        raise UnreadableJson("it begins with a byte order mark, which JSON does not have", (1, 1))
    if len(body) > MOST_BRACKETS and _is_crowded(body):
        raise TooManyObjects
    try:
        text = body.decode("utf-8")
        if len(body) > LONG and b"\\" not in body:
            quick = _read_plain(body) or _read_long(body, text)
            if quick is not None:
                return quick
        read = _DECODER.decode(text)
        if b"\\u" in body:  # only an escape can bring half a surrogate pair, which no answer could repeat
            json.dumps(read, ensure_ascii=False).encode("utf-8")
        return read
    except _Unusable:
        raise _first_unusable(body) from None
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


def _read_long(body: bytes, text: str) -> Any:
    """A body of long columns of numbers, three times as fast; None for one that has to be read with care.

    Its objects are looked at with the columns left out, the numbers by the parser of the models.
    """
    _DECODER.decode(_COLUMN.sub("[]", text))
    try:
        return from_json(body)
    except ValueError:
        return None


def _read_plain(body: bytes) -> Any:
    """The quickest way, open to bodies whose texts hold neither brackets nor colons; None for any other.

    If as many keys come out as there are colons, no object had one twice.
    """
    try:
        read = from_json(body)
    except ValueError:
        return None
    keys = containers = 0
    waiting = [read]
    while waiting:
        value = waiting.pop()
        containers += 1
        if isinstance(value, dict):
            if len(value) > MOST_KEYS:
                return None
            keys += len(value)
            waiting += [inner for inner in value.values() if isinstance(inner, (dict, list))]
        elif isinstance(value, list) and value and isinstance(value[0], (dict, list)):
            waiting += [inner for inner in value if isinstance(inner, (dict, list))]
    # a container that was passed over, behind a number in a list, is missed in this count
    brackets = body.count(b"{") + body.count(b"[")
    return read if (keys, containers) == (body.count(b":"), brackets) else None


def _is_crowded(body: bytes) -> bool:
    """Whether reading would take long for nothing; told without reading."""
    return body.count(b"{") + body.count(b"[") > MOST_BRACKETS or body.count(b":") > MOST_COLONS


class _Unusable(Exception):
    """Tells the fast pass to give way to the careful one."""


def _usable(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    made = dict(pairs)
    if len(made) != len(pairs) or len(pairs) > MOST_KEYS:
        raise _Unusable
    return made


_COLUMN = re.compile(r"\[[-+0-9.eE, \t\r\n]*\]")
_DECODER = json.JSONDecoder(object_pairs_hook=_usable)


class _Pairs(list[tuple[str, Any]]):
    """An object kept as its pairs, so that it can be told from an array."""


def _first_unusable(body: bytes) -> UnreadableJson | UnusableObject:
    """Find the first object at fault; a second reading, which only bad bodies pay for.

    Each value is looked at once, in the order of the text, and a path is put together only when found.
    """
    try:
        whole = json.loads(body.decode("utf-8"), object_pairs_hook=_Pairs)
    except json.JSONDecodeError as error:  # broken further on, which no key repairs
        return UnreadableJson(error.msg.rstrip(":"), (error.lineno, error.colno))
    except (RecursionError, ValueError):
        return UnreadableJson("brackets nested too deeply, or a whole number with too many digits")
    keys: list[str | int] = []  # the path to the innermost open value, after one that stands for the whole
    open_values: list[Iterator[tuple[str | int, Any]]] = [iter([("", whole)])]
    while open_values:
        for key, value in open_values[-1]:
            if not isinstance(value, list):  # an object is kept as a list, too
                continue
            keys.append(key)
            if isinstance(value, _Pairs) and (fault := _fault_of(value, keys)) is not None:
                return fault
            open_values.append(iter(value) if isinstance(value, _Pairs) else enumerate(value))
            break
        else:
            open_values.pop()
            if keys:
                keys.pop()
    raise AssertionError("the fast pass found a fault that the careful one does not")


def _fault_of(pairs: _Pairs, keys: list[str | int]) -> UnusableObject | None:
    seen: set[str] = set()
    for key, _ in pairs:
        if key in seen:
            return DuplicateKey((*keys[1:], key))
        seen.add(key)
    return TooManyKeys(tuple(keys[1:])) if len(pairs) > MOST_KEYS else None
