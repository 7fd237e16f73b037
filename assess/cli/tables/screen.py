"""Printing on stdout: tables that lose nothing, wrapped lines, the cautions.

rich is imported here, and this module only when there is something to print.
"""

from __future__ import annotations

import sys
import textwrap
from collections.abc import Iterable, Sequence

import click
from rich import box
from rich.cells import cell_len
from rich.console import Console, ConsoleOptions
from rich.table import Table
from rich.text import Text

PAGE_WIDTH = 110
"""Columns when stdout is a file or a pipe; a wider table is printed in full."""


def print_table(headers: Sequence[str], rows: Iterable[Sequence[str]], *, words: int = 1) -> None:
    """Print a table; its first `words` columns stand left, the others right.

    At a terminal that is too narrow, long entries go on in the next line of their cell; in a file
    or a pipe every row is one line, however long. Nothing is ever cut.

    Parameters
    ----------
    headers : sequence of str
        Column headings with their units; a line break is allowed.
    rows : iterable of sequences of str
        As many entries as there are headings.
    words : int
        The number of leading columns that hold words.
    """
    table = Table(
        box=box.SIMPLE_HEAD, padding=(0, 1, 0, 0), pad_edge=False, show_edge=False, header_style="bold"
    )
    for place, header in enumerate(headers):
        table.add_column(
            Text(header), justify="left" if place < words else "right", overflow="fold", vertical="bottom"
        )
    for row in rows:
        table.add_row(*(Text(entry) for entry in row))
    console = _console()
    if not console.is_terminal:
        console.width = max(PAGE_WIDTH, console.measure(table, options=_unbounded(console)).maximum)
    with console.capture() as captured:
        console.print(table)
    click.echo("\n".join(line.rstrip() for line in captured.get().splitlines()))


def print_heading(text: str) -> None:
    """Print a heading with an empty line above it."""
    click.echo()
    click.echo(text)
    click.echo("-" * cell_len(text))


def print_wrapped(text: str, *, first: str = "", then: str = "") -> None:
    """Print a sentence wrapped to the page."""
    width = min(_console().width, PAGE_WIDTH) if sys.stdout.isatty() else PAGE_WIDTH
    click.echo(
        textwrap.fill(
            text,
            width=max(width, 30),
            initial_indent=first,
            subsequent_indent=then,
            break_on_hyphens=False,
            break_long_words=False,
        )
    )


def print_cautions(cautions: Sequence[str]) -> None:
    """Print every caution, word for word, under its heading; this comes last."""
    if not cautions:
        return
    print_heading("Cautions")
    for caution in cautions:
        print_wrapped(caution, first="- ", then="  ")


def _console() -> Console:
    return Console(highlight=False, markup=False, emoji=False, soft_wrap=False)


def _unbounded(console: Console) -> ConsoleOptions:
    return console.options.update(width=10_000, max_width=10_000)
