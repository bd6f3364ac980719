"""The errors of wearbook: a user's mistake is a sentence, a bug is a traceback."""

from __future__ import annotations

from collections.abc import Sequence


class FleetError(Exception):
    """Something the user can mend: the message says what was found, in which record, and how to mend it."""


class RecordError(FleetError):
    """A record says something that cannot be, or that contradicts another record."""


class BookError(FleetError):
    """The book cannot be opened, read or written."""


class DataError(FleetError):
    """Life data or a table that cannot be used as it stands."""


class FitError(FleetError):
    """A fit that the data do not allow."""


class PlanError(FleetError):
    """A plan or forecast asked for with figures that cannot be."""


class ImportProblems(FleetError):
    """Everything wrong with a set of files, listed at once; nothing was written.

    Attributes
    ----------
    problems : tuple of str
        One sentence each, starting with file and row.
    """

    def __init__(self, problems: Sequence[str]) -> None:
        self.problems = tuple(problems)
        count = len(self.problems)
        head = "1 problem" if count == 1 else f"{count} problems"
        super().__init__(f"{head} found, nothing was written:\n" + "\n".join(self.problems))
