"""What all tests share: the same random examples in every plain run; a campaign may look further."""

import os

from hypothesis import settings

settings.register_profile("plain", derandomize=True, deadline=None)
settings.register_profile("search", deadline=None)
settings.load_profile(os.environ.get("BEDSTONE_EXAMPLES", "plain"))
