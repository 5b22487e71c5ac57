"""Property tests are the same in every run; look for more with --hypothesis-profile=explore."""

from hypothesis import settings

settings.register_profile("steady", derandomize=True, database=None, deadline=None)
settings.register_profile("explore", max_examples=5000, deadline=None)
settings.load_profile("steady")
