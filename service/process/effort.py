"""Questions that would take long are refused beforehand: how many alloys may need minimisation."""

from collections.abc import Iterable

from diagrams.errors import InvalidInput
from service.process.placed import Placed

MOST_COMPUTED = 6  # alloys a question; each takes a few seconds the first time, with its tolerance


def check_effort(subjects: Iterable[tuple[str, Placed | None]]) -> None:
    """Raise InvalidInput naming the first alloy (by its field) that is one too many to compute."""
    seen: set[int] = set()
    for field, subject in subjects:
        if subject is None or subject.melter.method != "minimisation":
            continue
        seen.add(id(subject.melter))
        if len(seen) > MOST_COMPUTED:
            raise InvalidInput(
                f"More than {MOST_COMPUTED} different alloys of three and more elements would take long.",
                field=field,
                remedy=f"Ask for at most {MOST_COMPUTED} of them at once; alloys of one or two elements and "
                "repeated ones do not count.",
            )
