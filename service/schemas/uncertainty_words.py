"""Words of the uncertainty budget that questions and answers share with the rules."""

from typing import Literal

Combination = Literal["worst case", "root-sum-square"]
WORST_CASE: Combination = "worst case"
ROOT_SUM_SQUARE: Combination = "root-sum-square"
