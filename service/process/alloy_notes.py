"""What an answer has to say about the alloy it used, where that is not quite the alloy that was asked for."""

from collections.abc import Mapping

from diagrams.alloys import Alloy
from diagrams.errors import InvalidInput
from diagrams.questions.melter import Melter


def check_tolerance(alloy: Alloy, tolerance_wt: Mapping[str, float]) -> None:
    """Refuse a tolerance that leaves open what varies; InvalidInput names `tolerance_wt`."""
    (element, *others) = alloy.composition_wt
    if others or not any(tolerance_wt.values()):
        return
    raise InvalidInput(
        f"Of {element} alone nothing can vary: a tolerance does not say what the rest would be.",
        field="tolerance_wt",
        remedy=f"Name the other element in composition_wt, such as {element} 99.9 and another 0.1, or leave "
        "tolerance_wt out.",
    )


def notes_on(alloy: Alloy, melter: Melter, tolerance_wt: Mapping[str, float]) -> tuple[str, ...]:
    """Elements the standard requires and its printed nominal leaves out; tolerances cut off or left aside.

    `tolerance_wt` is what was asked for, ± mass percent by element.
    """
    return (*_of_the_standard(alloy), *_of_the_tolerance(alloy, melter, tolerance_wt))


def _of_the_standard(alloy: Alloy) -> list[str]:
    row = alloy.filler
    if row is None:
        return []
    found = []
    for el, (low, high) in row.limits_wt.items():
        if low > 0.0 and el not in row.composition_wt:
            found.append(
                f"The standard asks for {low:g} to {high:g} wt% {el} in {row.name}, which the printed "
                f"nominal leaves out: the answer is for the alloy without {el}, and with it the alloy melts "
                "otherwise."
            )
    for el, (low, high) in alloy.limits_wt.items():
        if len(alloy.composition_wt) == 1 and low < high:
            found.append(
                f"The standard allows {low:g} to {high:g} wt% {el} without saying what the rest is: taken as "
                "pure, without tolerance."
            )
    return found


def _of_the_tolerance(alloy: Alloy, melter: Melter, tolerance_wt: Mapping[str, float]) -> list[str]:
    asked = {el: tolerance for el, tolerance in tolerance_wt.items() if tolerance > 0.0}
    if asked and melter.method == "standard table":
        return ["The tolerance is left aside: printed temperatures speak of the nominal composition only."]
    found = []
    for el in sorted(asked):
        nominal = alloy.composition_wt[el]
        ends = [
            end for end, passed in ((0, nominal < asked[el]), (100, nominal + asked[el] > 100.0)) if passed
        ]
        if ends:
            told = " and ".join(f"{end} wt%" for end in ends)
            found.append(f"The tolerance of {el}, {nominal:.4g} ± {asked[el]:g} wt%, is cut at {told}.")
    return found
