"""Speed, measured side by side in one run and printed as ratios.

`python -m tests.benchmarks` prints the table; nothing here is a test. CPU time counts the threads of the linear algebra
that wait for each other, so there is one of them, as in the command line.
"""

import os

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
