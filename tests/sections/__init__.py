"""Sections: against the minimiser, against stored diagrams, past the gate."""
