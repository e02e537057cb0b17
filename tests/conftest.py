"""What every test run shares: the hypothesis profiles and the files that are read by type checkers only.

`HYPOTHESIS_PROFILE=thorough python -m pytest` looks at a hundred times as many examples.
"""

import os

from hypothesis import HealthCheck, settings

# Timing differs too much between machines to be a test, so there is no deadline in any profile.
settings.register_profile("default", max_examples=40, deadline=None, suppress_health_check=[HealthCheck.too_slow])
settings.register_profile("thorough", parent=settings.get_profile("default"), max_examples=4000)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "default"))

# noxfile.py needs nox, which the test extra leaves out; the typing folder holds programs that are checked, never run.
collect_ignore_glob = ["noxfile.py", "typing/accepted*.py", "typing/rejected/*"]
