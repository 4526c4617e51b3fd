"""What every test shares: how properties are drawn."""

from hypothesis import settings

# A failure must come back on the next machine; a shared, busy machine must not turn a slow example into a failure.
settings.register_profile("default", derandomize=True, deadline=None, max_examples=100, database=None)
settings.register_profile("nightly", deadline=None, max_examples=2000, print_blob=True)
settings.load_profile("default")
