"""How near counts as on: the boundary rule in numbers, in one place.

A point within these of a border is read as the single phase beside it; a temperature within the tolerance
of an invariant is read just above it. Both are reported as on a boundary.
"""

ON_BORDER_WT = 1e-4  # mass percent
ON_INVARIANT_C = 0.005  # °C, half the accuracy to which invariants are found
COMPOUND_WIDTH_WT = 1e-9  # fields narrower than this have no inside: a line compound
