"""Hypothesis profiles: fast for every day, HYPOTHESIS_PROFILE=thorough for more; no deadlines."""

from __future__ import annotations

import os

from hypothesis import HealthCheck, settings

slow_machines = [HealthCheck.too_slow]
settings.register_profile("fast", max_examples=25, deadline=None, suppress_health_check=slow_machines)
settings.register_profile("thorough", max_examples=500, deadline=None, suppress_health_check=slow_machines)
# The same examples in every run: what CI finds, everybody finds.
settings.register_profile("ci", settings.get_profile("fast"), derandomize=True)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "ci" if os.environ.get("CI") else "fast"))
