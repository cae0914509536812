"""Weekly pass and command-window plans for small satellites flown by volunteers."""

import os

# More than one BLAS thread makes the small products of the pass search many
# times slower, and the variable counts only before numpy is first imported.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
os.environ.setdefault("OMP_NUM_THREADS", "1")

__version__ = "0.1.0"
