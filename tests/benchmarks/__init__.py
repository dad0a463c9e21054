"""Speed, measured as ratios in one run: `python -m tests.benchmarks`."""
