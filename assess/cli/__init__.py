"""The commands: each parses, calls the workflow and renders; none computes anything.

The entry point is `assess.cli.main.main`. Nothing heavy is imported here, so that help is quick.
"""

__all__: list[str] = []
