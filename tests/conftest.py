"""Property tests draw the same examples on every machine and in every run, so that a failure can be repeated."""

from hypothesis import settings

settings.register_profile("repeatable", derandomize=True, deadline=None, print_blob=False)
settings.load_profile("repeatable")
