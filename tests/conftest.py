"""What all tests share: the same random examples in every plain run; a campaign may look further."""

import os

from hypothesis import settings
from hypothesis.internal.conjecture import providers

settings.register_profile("plain", derandomize=True, deadline=None)
settings.register_profile("search", deadline=None)
settings.load_profile(os.environ.get("BEDSTONE_EXAMPLES", "plain"))

# Hypothesis mixes constants of the modules imported so far into its examples; in random order, and
# spread over processes, they would differ from run to run
if hasattr(providers, "_get_local_constants"):
    providers._get_local_constants = lambda: providers._local_constants
