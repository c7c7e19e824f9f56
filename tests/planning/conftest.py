"""Hypothesis settings of the pure rooms' tests.

The usual run tries 200 cases of every property; ``HYPOTHESIS_PROFILE=nightly uv run pytest tests/planning``
tries 2,000.
"""

import os

from hypothesis import HealthCheck, settings

SLOW = [HealthCheck.too_slow, HealthCheck.data_too_large, HealthCheck.filter_too_much]
settings.register_profile("usual", max_examples=200, deadline=None, suppress_health_check=SLOW)
settings.register_profile("nightly", max_examples=2000, deadline=None, suppress_health_check=SLOW)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "usual"))
