"""Turns what the models refuse into plain words: what is wrong, and what would be right."""

from collections.abc import Mapping
from typing import Any

Complaint = tuple[str, str]
"""What is wrong, and the remedy."""

_TEXTS: Mapping[str, Complaint] = {
    "missing": ("is missing.", "Add it."),
    "extra_forbidden": ("is no field here.", "Leave it out, or correct its spelling."),
    "finite_number": ("is not a finite number.", "Give an ordinary number; NaN and infinities are refused."),
    "float_type": ("must be a number.", "Write it as a JSON number, without quotes."),
    "float_parsing": ("must be a number.", "Write it with digits and a decimal point, such as 183.5."),
    "int_type": ("must be a whole number.", "Write it as a JSON number, without quotes."),
    "int_parsing": ("must be a whole number.", "Write it with digits only."),
    "int_from_float": ("must be a whole number.", "Leave out the decimals."),
    "int_parsing_size": ("is too large.", "Give a smaller whole number."),
    "bool_type": ("must be true or false.", "Write true or false, without quotes."),
    "bool_parsing": ("must be true or false.", "Write true or false."),
    "string_type": ("must be text.", "Put it in quotes."),
    "string_unicode": ("holds characters that are no valid Unicode.", "Send plain UTF-8 text."),
    "list_type": ("must be a list.", "Put the values in square brackets."),
    "dict_type": ("must be an object.", "Write it as pairs in curly brackets."),
    "model_type": ("must be an object.", "Write it as pairs in curly brackets."),
    "model_attributes_type": ("must be an object.", "Write it as pairs in curly brackets."),
    "none_required": ("must be left empty.", "Write null or leave it out."),
    "greater_than": ("must be greater than {gt}.", "Give a value greater than {gt}."),
    "greater_than_equal": ("must be {ge} or more.", "Give a value of {ge} or more."),
    "less_than": ("must be less than {lt}.", "Give a value less than {lt}."),
    "less_than_equal": ("must be {le} or less.", "Give a value of {le} or less."),
    "multiple_of": ("must be a multiple of {multiple_of}.", "Give a multiple of {multiple_of}."),
    "too_short": ("has {actual_length} entries, too few.", "Give at least {min_length}."),
    "too_long": ("has too many entries.", "Give at most {max_length}."),
    "string_too_short": (
        "is too short.",
        "Give more text; the least is {min_length}, counted in characters.",
    ),
    "string_too_long": ("is too long.", "Give at most {max_length} characters."),
    "string_pattern_mismatch": ("does not have the right form.", "Match the pattern {pattern}."),
    "literal_error": ("is none of the choices.", "Choose {expected}."),
    "enum": ("is none of the choices.", "Choose {expected}."),
    "invalid_key": ("has a key that is no text.", "Use text for keys."),
}


def complain(error: Mapping[str, Any], field: str) -> Complaint:
    """Put one refusal of a model into words for the person asking; never repeats what was sent."""
    context = error.get("ctx") or {}
    if error["type"] == "value_error":  # raised by a validator of ours, already in plain words
        text = str(context.get("error", "")) or str(error["msg"])
        return text, ""
    kind = error["type"]
    if kind == "float_type" and isinstance(error["input"], int) and not isinstance(error["input"], bool):
        kind = "finite_number"  # a whole number beyond what a float can hold
    if kind == "int_type" and isinstance(error["input"], float):
        kind = "int_from_float"
    wrong, remedy = _TEXTS.get(kind, ("cannot be used: " + str(error["msg"]) + ".", ""))
    return f"“{field}” {wrong.format_map(context)}", remedy.format_map(context)
