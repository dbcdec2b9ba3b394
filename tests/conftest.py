"""Settings that all tests share."""

import os

from hypothesis import HealthCheck, settings

# How fast examples are drawn says nothing about the package, and machines are noisy. A
# server must not fail on a change that has nothing to do with it, so it draws alike each time.
settings.register_profile(
    "lpview",
    deadline=None,
    derandomize="CI" in os.environ,
    suppress_health_check=[HealthCheck.too_slow],
)
settings.load_profile("lpview")
