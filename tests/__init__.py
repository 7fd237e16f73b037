"""Tests of Bedstone; they mirror the rooms they look at."""
