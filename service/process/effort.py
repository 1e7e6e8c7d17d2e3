"""Questions that would take long are refused beforehand: how much may need minimisation at once."""

from collections.abc import Iterable

from diagrams.errors import InvalidInput
from service.process.placed import Placed

MOST_COMPUTED = 6  # alloys a question
MOST_EFFORT = 48  # of all of them; six with tolerances for two of three elements


def check_effort(subjects: Iterable[tuple[str, Placed | None]], *, tolerances: bool = False) -> None:
    """Raise InvalidInput naming the first alloy (by its field) that is one too many to compute.

    `tolerances` says that extremes over them are searched as well. One alloy alone is never too much; the
    same alloy again costs nothing.
    """
    seen: set[int] = set()
    effort = 0
    for field, subject in subjects:
        if subject is None or subject.melter.effort == 0 or id(subject.melter) in seen:
            continue
        seen.add(id(subject.melter))
        effort += subject.melter.effort
        if len(seen) > MOST_COMPUTED:
            raise InvalidInput(
                f"More than {MOST_COMPUTED} different alloys of three and more elements would take long.",
                field=field,
                remedy=f"Ask for at most {MOST_COMPUTED} of them at once; alloys of one or two elements and "
                "repeated ones do not count.",
            )
        if tolerances and len(seen) > 1 and effort > MOST_EFFORT:
            raise InvalidInput(
                f"Alloys of three and more elements with tolerances take long: these come to {effort}, and "
                f"{MOST_EFFORT} is the most at once (corners of each tolerance times elements less one).",
                field=field,
                remedy="Ask for fewer of them at once, or give tolerances for fewer elements; an empty "
                "tolerance_wt asks for none.",
            )
