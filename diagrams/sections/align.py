"""Which parts of two neighbouring columns belong together, and which open or close between them."""

from dataclasses import dataclass

from diagrams.sections.upright import Sequence, Upright


@dataclass(frozen=True)
class Meeting:
    """Changes of two columns that run into each other; numbers count changes, the frame's ends among them.

    A pair of one and one runs through; all others meet at a node.
    """

    left: tuple[int, ...]
    right: tuple[int, ...]

    @property
    def through(self) -> bool:
        """Whether a boundary runs through."""
        return len(self.left) == len(self.right) == 1


def levels(column: Upright) -> list[float]:
    """The changes of a column with the frame's ends, upwards, °C."""
    return [column.low_c, *column.changes_c, column.high_c]


def meetings(one: Upright, two: Upright) -> list[Meeting]:
    """All changes of two columns, put together from below upwards."""
    found = []
    i = j = 0
    for a, b in [*_common(one.sequence, two.sequence), (len(one.parts), len(two.parts))]:
        found.append(Meeting(tuple(range(i, a + 1)), tuple(range(j, b + 1))))
        i, j = a + 1, b + 1
    return found


def spread(one: Upright, two: Upright) -> float:
    """Over how many °C the changes extend that meet at a node; 0 without any."""
    left, right = levels(one), levels(two)
    widths = []
    for meeting in meetings(one, two):
        if not meeting.through:
            t = [left[i] for i in meeting.left] + [right[j] for j in meeting.right]
            widths.append(max(t) - min(t))
    return max(widths, default=0.0)


def _common(one: Sequence, two: Sequence) -> list[tuple[int, int]]:
    """The longest common run of parts, as pairs of places."""
    best = [[0] * (len(two) + 1) for _ in range(len(one) + 1)]
    for i in range(len(one) - 1, -1, -1):
        for j in range(len(two) - 1, -1, -1):
            same = one[i] == two[j]
            best[i][j] = max(best[i + 1][j], best[i][j + 1], same and best[i + 1][j + 1] + 1)
    pairs = []
    i = j = 0
    while i < len(one) and j < len(two):
        if one[i] == two[j] and best[i][j] == best[i + 1][j + 1] + 1:
            pairs.append((i, j))
            i, j = i + 1, j + 1
        elif best[i + 1][j] >= best[i][j + 1]:
            i += 1
        else:
            j += 1
    return pairs
