"""Sections: temperature against the share of one alloy in another, as polygons proven by minimisation."""
