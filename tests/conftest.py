"""Property tests draw the same examples on every machine and in every run, so that a failure can be repeated."""

import sys
from pathlib import Path

from hypothesis import settings

settings.register_profile("repeatable", derandomize=True, deadline=None, print_blob=False)
settings.load_profile("repeatable")

# Helpers are imported as ``tests.name``; last on the path, so that the installed program is what is tested.
sys.path.append(str(Path(__file__).resolve().parent.parent))
