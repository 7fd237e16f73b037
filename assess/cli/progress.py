"""Progress of long work: on stderr, only at a terminal, only once it has taken a while."""

from __future__ import annotations

import sys
import time
from collections.abc import Callable, Iterator
from contextlib import ExitStack, contextmanager
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from rich.progress import Progress as Bar
    from rich.progress import TaskID

Progress = Callable[[str, int, int], None]
PATIENCE_SECONDS = 0.7


@contextmanager
def progress_on_stderr() -> Iterator[Progress | None]:
    """Give a progress function to hand to the workflow, or None if stderr is no terminal.

    Nothing is drawn, and rich is not imported, before the work has taken `PATIENCE_SECONDS`.
    """
    if not sys.stderr.isatty():
        yield None
        return
    with ExitStack() as stack:
        yield _Late(stack)


class _Late:
    """A progress bar that appears when waiting begins to be noticed."""

    def __init__(self, stack: ExitStack) -> None:
        self._stack = stack
        self._begun = time.monotonic()
        self._bar: Bar | None = None
        self._task: TaskID | None = None

    def __call__(self, what: str, done: int, total: int) -> None:
        if self._bar is None and time.monotonic() - self._begun < PATIENCE_SECONDS:
            return
        if self._bar is None:
            self._bar = self._stack.enter_context(_bar())
        if self._task is None:
            self._task = self._bar.add_task(what, total=total)
        self._bar.update(self._task, description=what, completed=done, total=total)


def _bar() -> Bar:
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, TextColumn
    from rich.progress import Progress as Bar

    return Bar(
        TextColumn("{task.description}", markup=False),
        BarColumn(),
        MofNCompleteColumn(),
        console=Console(stderr=True),
        transient=True,
    )
