"""The regulator's limits, and the verdict on a projection.

No limit is built in as law: a limits file names quantities and bounds.  A limit is *breached*
when its bound is passed, *kept but uncertain* when it is kept by less than the error of the
casts plus what the tilt of an internal wave would take, and *kept* otherwise.
"""

from collections.abc import Callable, Mapping
from dataclasses import asdict, dataclass, field
from datetime import date

import numpy as np
import xarray as xr
from numpy.typing import NDArray

from strata.errors import StrataError
from strata.margins import of_the_year

Array = NDArray[np.float64]

KEPT, BREACHED, UNCERTAIN = "kept", "breached", "kept but uncertain"

#: Standard deviations of cast error that a margin must exceed to count as certain (95 %).
COVERAGE = 2.0
BAR = 1e5  # Pa
MILLION = 1e6


@dataclass(frozen=True)
class Quantity:
    """Something a limit can be set on.

    Parameters
    ----------
    unit : str
    sense : {"most", "least"}
        Whether the value must stay below its bound or above it.
    words : str
        Name for tables and figures.
    value : callable
        ``value(result, reference)`` gives its time series; ``reference`` is the lake left
        alone or None, in which case the start of the result itself is meant.
    uncertainty : callable
        ``uncertainty(result, series, tilt)`` gives one time series in the same unit: cast
        error plus what an internal wave of that displacement [m] takes.
    against : {"", "start", "baseline"}
        What it is measured against unless the limit says otherwise; empty for a plain value.
    """

    unit: str
    sense: str
    words: str
    value: Callable[[xr.Dataset, xr.Dataset | None], Array]
    uncertainty: Callable[[xr.Dataset, Array, float], Array]
    against: str = ""


@dataclass(frozen=True)
class Limit:
    """One bound on one quantity.

    Parameters
    ----------
    quantity : str
        A key of :data:`QUANTITIES`.
    bound : float
        In the unit of the quantity.
    sense : {"most", "least", ""}
        Empty: the usual sense of the quantity.
    against : {"start", "baseline", ""}
        Empty: the usual reference of the quantity, or the start where no baseline is at hand.
    name : str
        Empty: the words of the quantity.
    """

    quantity: str
    bound: float
    sense: str = ""
    against: str = ""
    name: str = ""

    @property
    def subject(self) -> Quantity:
        """Return what is limited."""
        return QUANTITIES[self.quantity]

    @property
    def words(self) -> str:
        """Return the name for tables and figures."""
        return self.name or self.subject.words

    @property
    def rule(self) -> str:
        """Return the bound in words."""
        direction = {"most": "at most", "least": "at least"}[self.sense or self.subject.sense]
        unit = "" if self.subject.unit == "1" else f" {self.subject.unit}"
        if abs(self.bound) >= MILLION:
            return f"{direction} {self.bound / MILLION:g} million{unit}"
        return f"{direction} {self.bound:g}{unit}"


@dataclass(frozen=True)
class Limits:
    """What a regulator asks of a plan.

    Parameters
    ----------
    name : str
    limits : tuple of Limit
    wave_tilt : float
        Vertical displacement by an internal wave at its ends, taken off every margin [m].
    note : str
        Printed with every verdict, such as that the limits are invented.
    texts : mapping
        Name and text of the file they came from.
    """

    name: str
    limits: tuple[Limit, ...]
    wave_tilt: float = 0.0
    note: str = ""
    texts: Mapping[str, str] = field(default_factory=dict)


@dataclass(frozen=True)
class VerdictRow:
    """How one limit fared.

    Parameters
    ----------
    limit, quantity, rule, unit : str
        Words of the limit, key of the quantity, bound in words, unit of the numbers below.
    bound : float
    status : {"kept", "breached", "kept but uncertain"}
    first_date : datetime.date or None
        First breach; first uncertain date if there is no breach; None if plainly kept.
    least_distance : float
        Smallest distance to the bound, negative beyond it.
    worst_value : float
        The value at that time.
    worst_date : datetime.date
    uncertainty : float
        Cast error and wave tilt at that time.
    against : str
        What a share or change was measured against: "start", "baseline" or nothing.
    """

    limit: str
    quantity: str
    rule: str
    unit: str
    bound: float
    status: str
    first_date: date | None
    least_distance: float
    worst_value: float
    worst_date: date
    uncertainty: float
    against: str


@dataclass(frozen=True)
class StepChange:
    """One quantity of a verdict at its worst, with the step and with half of it.

    Parameters
    ----------
    quantity, words, unit : str
        As in :data:`QUANTITIES`.
    value, halved : float
        The worst over the run.
    change : float
        Largest difference at any time, in the unit of the quantity.
    """

    quantity: str
    words: str
    unit: str
    value: float
    halved: float
    change: float


@dataclass(frozen=True)
class Verdict:
    """How a projection fared under a set of limits."""

    limits: str
    note: str
    rows: tuple[VerdictRow, ...]

    @property
    def breached(self) -> bool:
        """Whether any limit is breached."""
        return any(row.status == BREACHED for row in self.rows)

    @property
    def status(self) -> str:
        """Return the worst status of all limits."""
        found = {row.status for row in self.rows}
        return next((s for s in (BREACHED, UNCERTAIN) if s in found), KEPT)

    def as_dicts(self) -> list[dict[str, object]]:
        """Return the rows as plain mappings, dates as ISO text."""
        rows = []
        for row in self.rows:
            plain = asdict(row)
            plain["first_date"] = row.first_date and row.first_date.isoformat()
            plain["worst_date"] = row.worst_date.isoformat()
            rows.append(plain)
        return rows


# What a limit can be set on -----------------------------------------------------------------


def _plain(variable: str, scale: float = 1.0) -> Callable[..., Array]:
    def value(result: xr.Dataset, reference: xr.Dataset | None) -> Array:
        return np.asarray(result[variable].values / scale)

    return value


def _reference(variable: str, result: xr.Dataset, reference: xr.Dataset | None) -> Array:
    """Return the series of the lake left alone at the times of the result, or the start."""
    if reference is None:
        return np.full(result.sizes["time"], _start(variable, result))
    time = result["time"].values.astype("datetime64[s]").astype(float)
    known = reference["time"].values.astype("datetime64[s]").astype(float)
    if time[0] < known[0] or time[-1] > known[-1]:
        raise StrataError("the projection without a plan covers less time than the plan's")
    return np.interp(time, known, _yearly(variable, reference))


def _start(variable: str, result: xr.Dataset) -> float:
    return float(_yearly(variable, result)[0])


def _yearly(variable: str, result: xr.Dataset) -> Array:
    """Return a series, seasonal ones as the mean of the year that ends at each time."""
    values = np.asarray(result[variable].values)
    if variable in ("phosphate_flux_up", "methane_flux_up", "schmidt_stability"):
        return of_the_year(result["time"].values, values, np.mean)
    return values


def _share(variable: str) -> Callable[..., Array]:
    def value(result: xr.Dataset, reference: xr.Dataset | None) -> Array:
        whole = _reference(variable, result, reference)
        share = np.full_like(whole, np.nan)  # where there is nothing to compare with
        return np.divide(_yearly(variable, result), whole, out=share, where=whole > 0.0)

    return value


def _sinking(result: xr.Dataset, reference: xr.Dataset | None) -> Array:
    depth = "gradient_depth"
    return np.asarray(result[depth].values - _reference(depth, result, reference))


def _methane_lost(result: xr.Dataset, reference: xr.Dataset | None) -> Array:
    lost = "methane_lost_to_upper_lake"
    beside = 0.0 if reference is None else _reference(lost, result, reference)
    return np.asarray((result[lost].values - beside) / _start("methane_in_place", result))


def _methane_vented(result: xr.Dataset, reference: xr.Dataset | None) -> Array:
    return np.asarray(result["methane_vented"].values / _start("methane_in_place", result))


def _slope(result: xr.Dataset) -> float:
    """Return the rise of hydrostatic pressure with depth [Pa m-1]."""
    pressure, depth = result["pressure"].values, result["depth"].values
    return float((pressure[-1] - pressure[0]) / (depth[-1] - depth[0]))


def _at(result: xr.Dataset, variable: str, depth: str) -> Array:
    return np.interp(result[depth].values, result["depth"].values, result[variable].values)


def _saturation_error(result: xr.Dataset, series: Array, tilt: float) -> Array:
    pressure = _at(result, "pressure", "largest_saturation_depth")
    risen = pressure - _slope(result) * tilt
    cast = COVERAGE * _at(result, "gas_pressure_error", "largest_saturation_depth")
    return np.asarray(series * (cast + pressure / risen - 1.0))


def _surface_saturation_error(result: xr.Dataset, series: Array, tilt: float) -> Array:
    return np.asarray(COVERAGE * float(result["gas_pressure_error"][0]) * series)


def _margin_error(result: xr.Dataset, series: Array, tilt: float) -> Array:
    gas = _at(result, "pressure", "least_pressure_margin_depth") - series * BAR
    cast = COVERAGE * _at(result, "gas_pressure_error", "least_pressure_margin_depth")
    return np.asarray((cast * gas + _slope(result) * tilt) / BAR)


def _lift_error(result: xr.Dataset, series: Array, tilt: float) -> Array:
    gas = _at(result, "pressure", "least_lift_depth") - _slope(result) * series
    cast = COVERAGE * _at(result, "gas_pressure_error", "least_lift_depth")
    return np.asarray(cast * gas / _slope(result) + tilt)


def _tilt(result: xr.Dataset, series: Array, tilt: float) -> Array:
    return np.full_like(series, tilt)


def _none(result: xr.Dataset, series: Array, tilt: float) -> Array:
    """Return no uncertainty: cast error cancels in the share, and a wave moves no amount."""
    return np.zeros_like(series)


def _relative(variable: str) -> Callable[..., Array]:
    def uncertainty(result: xr.Dataset, series: Array, tilt: float) -> Array:
        return np.asarray(COVERAGE * float(result[variable]) * np.abs(series))

    return uncertainty


_OF_METHANE = _relative("methane_in_place_error")
_OF_STEP = _relative("gradient_strength_error")

#: What a limit can be set on, by the key of a limits file.
QUANTITIES: Mapping[str, Quantity] = {
    "largest_saturation": Quantity(
        "1", "most", "largest saturation", _plain("largest_saturation"), _saturation_error
    ),
    "surface_saturation": Quantity(
        "1",
        "most",
        "saturation with CH4, CO2 and H2S in the surface layer",
        _plain("surface_saturation"),
        _surface_saturation_error,
    ),
    "least_pressure_margin_bar": Quantity(
        "bar", "least", "pressure margin", _plain("least_pressure_margin", BAR), _margin_error
    ),
    "least_lift_m": Quantity(
        "m", "least", "lift to bubbling", _plain("least_lift"), _lift_error
    ),
    "gradient_strength_share": Quantity(
        "1",
        "least",
        "strength of the main gradient",
        _share("gradient_strength"),
        _OF_STEP,
        "start",
    ),
    "gradient_sinking_m": Quantity(
        "m", "most", "sinking of the main gradient", _sinking, _tilt, "start"
    ),
    "gradient_depth_m": Quantity(
        "m", "most", "depth of the main gradient", _plain("gradient_depth"), _tilt
    ),
    "schmidt_stability_share": Quantity(
        "1", "least", "Schmidt stability", _share("schmidt_stability"), _OF_STEP, "baseline"
    ),
    "phosphate_flux_share": Quantity(
        "1",
        "most",
        "phosphate into the surface layer",
        _share("phosphate_flux_up"),
        _none,
        "baseline",
    ),
    "oxic_depth_m": Quantity(
        "m", "least", "thickness of the oxic layer", _plain("oxic_depth"), _tilt
    ),
    "methane_lost_share": Quantity(
        "1", "most", "methane lost upward", _methane_lost, _OF_METHANE, "baseline"
    ),
    "methane_vented_share": Quantity(
        "1", "most", "methane vented", _methane_vented, _OF_METHANE
    ),
    "return_water_in_surface_layer_m3": Quantity(
        "m3",
        "most",
        "return water in the surface layer",
        _plain("return_water_in_surface_layer"),
        _none,
    ),
    "methane_remaining_share": Quantity(
        "1", "least", "methane remaining", _share("methane_in_place"), _none, "start"
    ),
}


# The verdict --------------------------------------------------------------------------------


def series(
    result: xr.Dataset, limit: Limit, baseline: xr.Dataset | None = None
) -> tuple[Array, str]:
    """Return what a limit is set on through time, and what it is measured against.

    Raises
    ------
    strata.StrataError
        If the limit asks for a comparison with the lake left alone and none is given.
    """
    subject = limit.subject
    if limit.against == "baseline" and baseline is None:
        raise StrataError(
            f"the limit on {limit.quantity} is set against the lake left alone; "
            "give its projection as the baseline"
        )
    against = limit.against or subject.against
    if against == "baseline" and baseline is None:
        against = "start"
    return subject.value(result, baseline if against == "baseline" else None), against


def _judge_one(
    result: xr.Dataset, limit: Limit, tilt: float, baseline: xr.Dataset | None
) -> VerdictRow:
    """Return how one limit fared."""
    values, against = series(result, limit, baseline)
    uncertainty = limit.subject.uncertainty(result, values, tilt)
    upward = (limit.sense or limit.subject.sense) == "most"
    distance = limit.bound - values if upward else values - limit.bound
    dates = result["time"].values.astype("datetime64[D]").astype(object)
    known = np.isfinite(distance)
    if not known.any():  # no parcel can bubble however far it rises; nothing to compare with
        distance, uncertainty = np.full_like(distance, np.inf), np.zeros_like(distance)
        known = np.ones_like(known)
    passed = np.flatnonzero(known & (distance < 0.0))
    unsure = np.flatnonzero(known & (distance < uncertainty))
    status, first = KEPT, None
    if passed.size:
        status, first = BREACHED, dates[passed[0]]
    elif unsure.size:
        status, first = UNCERTAIN, dates[unsure[0]]
    worst = int(np.argmin(np.where(known, distance, np.inf)))
    return VerdictRow(
        limit=limit.words,
        quantity=limit.quantity,
        rule=limit.rule,
        unit=limit.subject.unit,
        bound=limit.bound,
        status=status,
        first_date=first,
        least_distance=float(distance[worst]),
        worst_value=float(values[worst]),
        worst_date=dates[worst],
        uncertainty=float(uncertainty[worst]),
        against=against,
    )


def judge(result: xr.Dataset, limits: Limits, baseline: xr.Dataset | None = None) -> Verdict:
    """Return how a projection fares under a regulator's limits.

    Parameters
    ----------
    result : xarray.Dataset
        A projection, as ``strata.project`` returns it.
    limits : Limits
    baseline : xarray.Dataset, optional
        The lake left alone over the same time.
    """
    rows = tuple(
        _judge_one(result, limit, limits.wave_tilt, baseline) for limit in limits.limits
    )
    return Verdict(limits.name, limits.note, rows)
