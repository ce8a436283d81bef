"""What can go wrong, in words a user can act on.

Everything raised on purpose derives from :class:`StrataError`; ``strata.cli`` alone turns the
kinds into exit codes.
"""

from collections.abc import Iterable
from dataclasses import dataclass


class StrataError(Exception):
    """Anything that strata refuses to do, worded for its user."""


@dataclass(frozen=True)
class Fault:
    """One thing wrong in one place of one file.

    Parameters
    ----------
    file : str
        Name of the file as the user gave it.
    place : str
        Dotted key, or row and column; empty when the whole file is meant.
    message : str
        The value given and what is allowed.
    """

    file: str
    place: str
    message: str

    def __str__(self) -> str:
        """Return the fault as one line."""
        return ": ".join(part for part in (self.file, self.place) if part) + " " + self.message


class InputError(StrataError):
    """One or more faults in what the user handed over; all of them are reported at once."""

    def __init__(self, faults: Iterable[Fault]) -> None:
        self.faults = tuple(faults)
        super().__init__("\n".join(str(fault) for fault in self.faults))

    def __reduce__(self) -> tuple[type, tuple[tuple[Fault, ...]]]:
        """Keep the faults when the error crosses from one process to another."""
        return type(self), (self.faults,)


class OutOfRangeError(StrataError, ValueError):
    """A value outside the range in which the source of a formula stands."""


class ComputationError(StrataError):
    """A computation that did not converge or did not keep its balance."""
