"""The HTTP routes: parse, ask, present."""
