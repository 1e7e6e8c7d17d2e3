"""Recordings as text tables: time in the first column, one sensor a column, names in the first line.

Columns are parted by semicolon, tab or comma; with the first two, numbers may have a decimal comma. RFC 4180
quotes are understood. Lines that begin with # are none of the table, unless they have its columns.
"""

import csv
import io
import re
from collections.abc import Sequence

import numpy as np

from diagrams.errors import InvalidInput
from service.process.profiles.recording import Channel
from service.process.profiles.trace import Floats
from service.schemas.profile_words import MOST_SAMPLES, MOST_SENSORS

SEPARATORS = (";", "\t", ",")
PLAIN = re.compile(r"[0-9eE+\-.,; \t\n]*")
QUOTED = re.compile(r'"[^"]*"')
NUMBER = re.compile(r"[+-]?(\d+([.,]\d*)?|[.,]\d+)([eE][+-]?\d+)?")


def channels_from(text: str) -> tuple[Channel, ...]:
    """The columns of a table; empty cells are missing samples. Raises InvalidInput naming line and column."""
    text = text.removeprefix("\ufeff")
    numbered = [
        (number, line)
        for number, line in enumerate(text.splitlines(), 1)
        if line.strip() and not line.startswith("#")
    ]
    lines, at = [line for _, line in numbered], [number for number, _ in numbered[1:]]
    if len(lines) < 2:
        raise _wrong("The table holds no samples.", "Send a line of names and at least two lines of numbers.")
    bare = QUOTED.sub("", lines[0])
    separator = next((s for s in SEPARATORS if s in bare), None)
    if separator is None:
        raise _wrong(
            "The first line has a single column.",
            "Part the columns by semicolon, tab or comma: time first, then one column a sensor.",
        )
    names = [name.strip() for name in _rows(lines[:1], separator)[0]]
    if all(NUMBER.fullmatch(name) for name in names):
        raise _wrong(
            "The first line holds numbers where the names should stand.",
            "Begin with a line of names: time, then one name a sensor.",
        )
    _check_comments(text, numbered[0][0], separator, len(names))
    if len(names) - 1 > MOST_SENSORS or len(lines) - 1 > MOST_SAMPLES:
        raise _wrong(
            f"The table has {len(names) - 1} sensors and {len(lines) - 1} samples.",
            f"Send at most {MOST_SENSORS} sensors and {MOST_SAMPLES} samples at a time.",
        )
    values = _quick(lines[1:], len(names), separator)
    if values is None:
        values = _numbers(_rows(lines[1:], separator), at, len(names), separator)
    times = values[:, 0]
    if not np.isfinite(times).all():
        line = at[int(np.argmin(np.isfinite(times)))]
        raise _wrong(f"Line {line} has no time.", "Give every line a time in seconds, in the first column.")
    return tuple(
        Channel(name, times, values[:, k + 1], f"table.column {k + 2}") for k, name in enumerate(names[1:])
    )


def _check_comments(text: str, names_at: int, separator: str, width: int) -> None:
    """Refuse what looks like a remark and is a sample: spreadsheets write #N/A and the like into cells."""
    for number, line in enumerate(text.splitlines(), 1):
        if number <= names_at or not line.startswith("#"):
            continue
        readings = [cell.strip().strip('"') for cell in line.split(separator)[1:]]
        sampled = any(readings) and all(not cell or NUMBER.fullmatch(cell) for cell in readings)
        if sampled and len(readings) == width - 1:
            raise _wrong(
                f"Line {number} begins with # and has the readings of a sample, but no time.",
                "Give it a time, or take it out; remarks may stand above the names.",
            )


def _quick(lines: Sequence[str], width: int, separator: str) -> Floats | None:
    """Complete tables of plain numbers in one go; None for any other, which is read cell by cell."""
    text = "\n".join(lines)
    if not PLAIN.fullmatch(text):
        return None
    if separator != "," and "," in text:
        if "." in text:
            return None
        text = text.replace(",", ".")
    try:
        values = np.loadtxt(io.StringIO(text), delimiter=separator, ndmin=2)
    except ValueError:
        return None  # reading it cell by cell tells where it fails
    return values if values.shape == (len(lines), width) and np.isfinite(values).all() else None


def _rows(lines: Sequence[str], separator: str) -> list[list[str]]:
    if not any('"' in line for line in lines):  # the usual case, several times faster
        return [line.split(separator) for line in lines]
    try:
        rows = list(csv.reader(io.StringIO("\n".join(lines)), delimiter=separator, strict=True))
    except csv.Error as error:
        raise _wrong(f"The table cannot be read: {error}.", "Check the quotes (RFC 4180).") from error
    if len(rows) != len(lines):
        raise _wrong("A quoted cell runs over several lines.", "Keep every cell on one line.")
    return rows


def _numbers(rows: Sequence[Sequence[str]], at: Sequence[int], width: int, separator: str) -> Floats:
    """Cell by cell; `at` are the numbers of their lines in the table."""
    for line, row in zip(at, rows, strict=True):
        if len(row) != width:
            hint = " A decimal comma needs columns parted by semicolon or tab." if separator == "," else ""
            raise _wrong(
                f"Line {line} has {len(row)} columns, the first line {width}.",
                f"Give every line as many columns as there are names; empty cells may be empty.{hint}",
            )
    cells = [cell.strip() for row in rows for cell in row]
    points, commas = any("." in c for c in cells), any("," in c for c in cells)
    if points and commas:
        raise _wrong(
            "Some numbers have a point and some a comma.",
            "Use one decimal mark throughout and no mark for thousands.",
        )
    for k, cell in enumerate(cells):
        if cell and not NUMBER.fullmatch(cell):
            raise _wrong(
                f"Line {at[k // width]}, column {k % width + 1}: “{cell[:40]}” is no number.",
                "Send plain numbers; leave the cell of a missing sample empty.",
            )
    plain = [cell.replace(",", ".") if cell else "nan" for cell in cells]
    values = np.array(plain).astype(np.float64)
    if np.isinf(values).any():
        k = int(np.argmax(np.isinf(values)))
        raise _wrong(
            f"Line {at[k // width]}, column {k % width + 1}: “{cells[k][:40]}” is too large a number.",
            "Send seconds and degrees Celsius.",
        )
    return values.reshape(len(rows), width)


def _wrong(what: str, remedy: str) -> InvalidInput:
    return InvalidInput(what, field="table", remedy=remedy)
