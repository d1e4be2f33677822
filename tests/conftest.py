"""Settings of the whole suite."""

import os

from hypothesis import settings

# The tests run on all cores already; threads of small matrix products would only be in their way.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

# The same examples in every run, so that a red run is red again; no deadlines, since a busy machine
# is no error. `pytest --hypothesis-profile=explore` looks for new examples.
settings.register_profile("repeatable", deadline=None, derandomize=True)
settings.register_profile("explore", deadline=None, max_examples=1000)
settings.load_profile("repeatable")
