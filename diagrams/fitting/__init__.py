"""Fits coefficients of the parameter files to printed points; run as `python -m diagrams.fitting`."""
