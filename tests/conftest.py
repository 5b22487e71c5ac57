"""Property tests are the same in every run; look for more with --hypothesis-profile=explore."""

import os

# Tests run in several processes; threads of the linear algebra on top would only contend. This
# has to stand before numpy is imported.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

from hypothesis import settings

settings.register_profile("steady", derandomize=True, database=None, deadline=None)
settings.register_profile("explore", max_examples=5000, deadline=None)
settings.load_profile("steady")
