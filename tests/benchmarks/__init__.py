"""Speed, measured side by side in one run and printed as ratios.

`python -m tests.benchmarks` prints the table; nothing here is a test.
"""
