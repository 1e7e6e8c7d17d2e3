"""Speed and memory as ratios against a floor measured in the same run: `python -m tests.benchmarks`."""

import diagrams  # noqa: F401  # before numpy, as in the service
