"""Values in an address line are as strict as in a body: numbers as JSON writes them, true or false."""

from typing import Any, Literal, get_args

from service.complaints import Complaint
from service.schemas.address import NUMBER

Kind = Literal["number", "switch"]

_NO_FINITE_NUMBER = frozenset({"nan", "inf", "-inf", "infinity", "-infinity"})  # the models say so themselves


def kind_of(annotation: Any) -> Kind | None:
    """Whether a parameter is a number or a switch; None if it is text or one of several choices."""
    kinds = _kinds(annotation)
    return "switch" if bool in kinds else "number" if float in kinds or int in kinds else None


def complaint_about(kind: Kind, name: str, text: str) -> Complaint | None:
    """What is wrong with how a value is written, and the remedy; None if nothing is."""
    if kind == "switch":
        if text in ("true", "false"):
            return None
        return f"“{name}” must be true or false.", "Write true or false, in lower case."
    if NUMBER.fullmatch(text) or text.lower() in _NO_FINITE_NUMBER:
        return None
    if "," in text:
        return f"“{name}” must be a number.", "Write the decimals after a point, such as 183.5."
    return f"“{name}” must be a number.", _as_in_json(text)


def _as_in_json(text: str) -> str:
    if text[:1] in ("+", " "):  # a plus sign in an address line arrives as a space
        return "Leave out the plus sign and spaces: write 183.5 or -10."
    return "Write it as a plain number, such as 183.5 or -10: digits, and a point before decimals."


def _kinds(annotation: Any) -> list[Any]:
    """The plain types an annotation consists of."""
    inner = get_args(annotation)
    return [kind for one in inner for kind in _kinds(one)] if inner else [annotation]
