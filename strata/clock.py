"""The calendar of a projection: one sorted list of dates at which something changes."""

import math
from collections.abc import Iterable
from dataclasses import dataclass
from datetime import date, timedelta
from itertools import pairwise

DAY = 86400.0  # s


@dataclass(frozen=True)
class Span:
    """A stretch of days within which nothing changes from outside."""

    begin: date
    end: date
    output: bool  # whether the state at its end is written

    @property
    def days(self) -> int:
        """Return its length in days."""
        return (self.end - self.begin).days

    def steps(self, step_days: float) -> tuple[int, float]:
        """Return how many equal steps of at most ``step_days`` fill it, and how long [s]."""
        count = max(1, math.ceil(self.days / step_days))
        return count, self.days * DAY / count


def add_years(day: date, years: float) -> date:
    """Return the day so many years on (29 February becomes 1 March)."""
    whole = int(years)
    try:
        moved = day.replace(year=day.year + whole)
    except ValueError:
        moved = date(day.year + whole, 3, 1)
    return moved + timedelta(days=round((years - whole) * 365.25))


def month_starts(begin: date, end: date) -> list[date]:
    """Return the first days of the months after ``begin`` up to ``end``."""
    days: list[date] = []
    year, month = begin.year, begin.month
    while True:
        year, month = (year + 1, 1) if month == 12 else (year, month + 1)
        day = date(year, month, 1)
        if day > end:
            return days
        days.append(day)


def spans(begin: date, end: date, changes: Iterable[date]) -> list[Span]:
    """Return the spans between month starts and dated changes; output at months and end."""
    outputs = {*month_starts(begin, end), end}
    edges = sorted({begin, *outputs, *(day for day in changes if begin < day < end)})
    return [Span(first, second, second in outputs) for first, second in pairwise(edges)]
