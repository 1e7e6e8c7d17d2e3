"""The web service: temperature windows of soldered and brazed joints over HTTP."""

__version__ = "0.1.0"
