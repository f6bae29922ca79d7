"""Settings for every test: no window needs a screen, and a run can be repeated."""

import os

from hypothesis import settings

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

# Time limits per example fail on a busy machine, and random examples on an unlucky day.
settings.register_profile("repeatable", deadline=None, derandomize=True)
settings.load_profile("repeatable")
