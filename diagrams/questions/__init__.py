"""See the module names: one idea a file."""
