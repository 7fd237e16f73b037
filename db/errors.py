"""The one exception family a person sees."""

from __future__ import annotations


class BedstoneError(Exception):
    """The input or the call is wrong, or the question cannot be answered from what is there.

    Parameters
    ----------
    problem : str
        What is wrong, in plain words.
    file : str, optional
        The file it stands in.
    field : str, optional
        The field, as a path a person can follow: ``girder "north", support 2, stiffness``.
    remedy : str, optional
        What would be right, with an example where one helps.

    ``str(error)`` is one line.
    """

    def __init__(
        self, problem: str, *, file: str | None = None, field: str | None = None, remedy: str | None = None
    ) -> None:
        self.problem = problem
        self.file = file
        self.field = field
        self.remedy = remedy
        super().__init__(self.line())

    def line(self) -> str:
        """Return the message as one line: file, field, problem, remedy."""
        where = ", ".join(part for part in (self.file, self.field) if part)
        text = f"{where}: {self.problem}" if where else self.problem
        if self.remedy:
            text = f"{text}; {self.remedy}"
        return " ".join(text.split())

    def at(self, *, file: str | None = None, field: str | None = None) -> BedstoneError:
        """Return a copy that names a file or field where this one names none."""
        return type(self)(self.problem, file=self.file or file, field=self.field or field, remedy=self.remedy)
