"""How fast the column is against ``solve_ivp`` (BDF) of the same equation, at equal error.

Run with ``PYTHONPATH=.:tests python tests/benchmarks/ode.py``; prints ratios from one run,
asserts nothing.  Ten tracers are carried in a bowl with two springs and fluxes out of its bed:

smooth, fixed K
    Thirty years, diffusivities that never change: linear, the friendliest case for BDF, which
    is handed the constant matrix of all tracers and takes ever longer steps.
smooth, K by stability
    The same with K = a / N [G84] from temperature and salinity.
seasonal
    Three years, no wind; heat goes in and out at the surface by an equilibrium temperature
    that swings through the year, the upper lake warms and overturns.  Stirring near the
    surface is prescribed as a coefficient a that falls with depth.

By lines means central differences on even layers with an exact sparse Jacobian, all tracers
at once (one by one was slower where K is fixed), tolerance absolute in units of each tracer's
range.  How much longer the same takes where only the sparsity of the Jacobian is handed over
is printed too.  Both sides have the same density, areas, springs, K and molecular
diffusivities, held as of the start.  Gases weigh nothing and none crosses the surface, so that
nothing but temperature and salinity drives mixing; the column nevertheless works out free CO2
and books in every step, the lines do not.  Plants, wind and reactions are in neither.

What is compared:

* Smooth cases: error of the final profiles, root mean square over layers and tracers, each in
  units of its range, against lines on four times the layers and far tighter.  It contains the
  error of layers *and* of time, so the lines may also choose their number of layers.
* Seasonal case: error of integrals through the year (heat of the lake, contents of the upper
  40 m of every tracer, every five days), each in units of its own swing, against the same
  method's limit on the same layers: the column with steps of an hour and a half, the lines
  with a tight tolerance.  The two limits overturn differently (at once and without rest;
  by a large K that grows with how unstable it is), and how far apart they lie is printed:
  below that difference neither is nearer to the truth.  Values at the edge of the mixed pool
  are not compared.

Equal error: the time by lines at the error of the column is interpolated, log against log,
between runs of several tolerances on the same layers, the least over all pairs of runs; where
the fastest run is nearer than the column, its time stands.  Times are those of the processor.

[G84] Gargett 1984, J. Mar. Res. 42:359-393.
"""

import time
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from column_checks import DAY, YEAR, column_of, means_of, plain_lake, seal
from scipy.integrate import solve_ivp
from scipy.sparse import csc_matrix, diags, identity, kron
from second_solutions import BOWL, FLOOR, Lines, bowl_springs, lines_of_bowl

from strata.column.column import REFERENCE_DENSITY, REFERENCE_HEAT_CAPACITY, Column
from strata.column.tracers import SALINITY, TEMPERATURE, TRACERS
from strata.compiled import broadcast
from strata.lake.climate import Weather
from strata.lake.site import BedSource
from strata.water.density import parcel_density, potential_temperature

#: Tracers that the two springs bring besides salt [mol/m3].
DISSOLVED = {
    "deep": {
        "DIC": 6.0,
        "alkalinity": 5.0,
        "calcium": 1.0,
        "CH4": 2.0,
        "N2": 0.6,
        "H2S": 0.1,
        "phosphate": 1.0,
    },
    "upper": {
        "DIC": 2.0,
        "alkalinity": 1.5,
        "calcium": 0.3,
        "CH4": 0.2,
        "N2": 0.5,
        "phosphate": 0.1,
    },
}
#: Of the bed below 100 m [mol m-2 s-1].
BED = {"phosphate": 1e-8, "CH4": 3e-8, "DIC": 5e-8, "H2S": 1e-8}
BED_BETWEEN = (100.0, 200.0)  # m
#: Start of the tracers: at the surface, and how much more below 140 m.
START = {
    "temperature": (20.0, 1.0),
    "DIC": (1.5, 4.0),
    "alkalinity": (1.2, 3.0),
    "calcium": (0.2, 0.6),
    "CH4": (0.05, 1.5),
    "N2": (0.5, 0.1),
    "O2": (0.2, -0.2),
    "H2S": (0.0, 0.08),
    "phosphate": (0.2, 0.5),
}
SURFACE_LAYER = 40.0  # m, over which contents are told in the seasonal case
VISITS = 73  # of the clock in a year
#: Of solve_ivp, so that the absolute tolerance rules; Newton's own is then 0.002 of it (for
#: looser ones the seasonal case took longer).
RELATIVE_TOLERANCE = 1e-12


@dataclass(frozen=True)
class Case:
    """What sets the cases apart."""

    name: str
    years: int
    layers: int
    goal: float
    coefficient: float = 0.0  # m2 s-2, a in K = a / N
    stirred: float = 0.0  # m2 s-2, added to it at the surface, falling by e over 10 m
    least: float = 2e-7  # m2/s; a fixed K where there is no coefficient
    most: float = 2e-7
    exchange: float = 0.0  # W m-2 K-1
    fresh: float = 0.0  # m, salinity rises below

    def start(self, name, depth):
        """Return what the lake starts with at a depth."""
        if name == "salinity":
            return 1.0 + 0.02 * np.maximum(depth - self.fresh, 0.0)
        upper, more = START[name]
        return upper + more / (1.0 + np.exp(-(depth - 140.0) / 6.0))

    def springs(self):
        """Return the springs, each as salty as the lake at the foot of its interval."""
        return tuple(
            replace(
                spring,
                temperature=21.0 if spring.name == "deep" else 20.0,
                salinity=float(self.start("salinity", spring.spread[1] - 5.0)),
                dissolved=DISSOLVED[spring.name],
            )
            for spring in bowl_springs()
        )

    def coefficients(self, faces):
        """Return the coefficient a of K = a / N at the faces [m2 s-2]."""
        return self.coefficient + self.stirred * np.exp(-faces / 10.0)

    def equilibrium(self, seconds):
        """Return the equilibrium temperature of the surface [degC]."""
        return 22.0 + 4.0 * np.sin(2.0 * np.pi * seconds / YEAR)


def column_for(case: Case, layers: int) -> Column:
    """Return the column of a case at its start."""
    faces = np.linspace(0.0, FLOOR, layers + 1)
    bed = tuple(BedSource(tracer, *BED_BETWEEN, flux) for tracer, flux in BED.items())
    lake = plain_lake(faces, BOWL, springs=case.springs(), bed=bed)
    mixing = replace(
        lake.mixing,
        coefficient=case.coefficient or 1e-30,
        least=case.least,
        most=case.most,
        convection_efficiency=0.0,
    )
    lake = replace(lake, mixing=mixing)
    basin = column_of(lake, 1.0).basin
    values = np.column_stack(
        [means_of(lambda z, n=name: case.start(n, z), basin) for name in TRACERS]
    )
    column = Column(lake, values)
    seal(column)
    column.molar_mass, column.molar_volume = np.zeros((2, len(column.molar_mass)))
    column.grid = column.grid._replace(
        molar_mass=column.molar_mass,
        molar_volume=column.molar_volume,
        turbulent=np.maximum(case.coefficients(basin.faces), 1e-30),
    )
    return column


def by_column(case: Case, layers: int, step_days: float):
    """Return processor time [s] and the states after every visit, by the column.

    The clock visits five-daily where heat crosses the surface, else once a year.
    """
    column = column_for(case, layers)
    visits = case.years * (VISITS if case.exchange > 0.0 else 1)
    span = case.years * YEAR / visits
    steps = max(1, round(span / (step_days * DAY)))
    states = []
    begin = time.process_time()
    for visit in range(visits):
        around = case.equilibrium((visit + 0.5) * span)
        column.refresh(slow=False)
        gives = column.natural(column.surroundings())
        weather = Weather(around, case.exchange, 0.0, 0.0, 0.0)
        column.advance(weather, [], gives, steps, span / steps)
        states.append(column.values.copy())
    return time.process_time() - begin, np.array(states)


class Equation:
    """The equation of a case cut into lines, and its Jacobian; unknowns layer by layer."""

    #: K added where unstable [m2/s], and how unstable it must be for most of it [s-2]: of
    #: those tried, the fastest whose limit lies within 1 % of that of the column.
    OVERTURNING, SCALE = 1e-2, 1e-6

    def __init__(self, case: Case, layers: int, column: Column) -> None:
        self.case, self.lines = case, lines_of_bowl(layers)
        lines: Lines = self.lines
        self.shape = (layers, len(TRACERS))
        faces = lines.faces
        self.pressure = np.interp(faces, column.basin.faces, column.face_pressure)[1:-1]
        self.gravity = column.gravity
        self.contraction = column.lake.site.haline_contraction
        self.step = faces[1] - faces[0]
        self.coefficient = case.coefficients(faces[1:-1])
        molecular = column.slow.molecular[:, : len(TRACERS)].T
        self.molecular = np.array(
            [np.interp(faces, column.basin.faces, each) for each in molecular]
        ).T[1:-1]
        self.over = lines.conductance(1.0)[1:-1]  # m, area over distance
        self.pull = case.exchange * lines.area[0] / REFERENCE_DENSITY / REFERENCE_HEAT_CAPACITY
        self.pull /= lines.volume[0]
        self.steady = self._entering(column) / lines.volume[:, None]
        self.moved = lines.matrix(0.0)
        self.start = np.column_stack(
            [case.start(name, lines.depth) * np.ones(layers) for name in TRACERS]
        )

    def _entering(self, column):
        """Return what springs and bed give each layer [amount per second]."""
        springs = self.case.springs()
        water = np.zeros((len(springs), len(TRACERS)))
        for row, spring in zip(water, springs, strict=True):
            at = column.pressure_at(spring.depth)
            row[TEMPERATURE] = potential_temperature(spring.temperature, at)
            row[SALINITY] = spring.salinity
            for name, amount in spring.dissolved.items():
                row[TRACERS.index(name)] = amount
        entering = self.lines.springs.T @ water
        for name, flux in BED.items():
            deep = self.lines.depth > BED_BETWEEN[0]
            entering[:, TRACERS.index(name)] += flux * self.lines.bed * deep
        return entering

    @property
    def constant(self):
        """Return whether diffusivities never change."""
        return self.case.coefficient == 0.0

    def _density(self, c, layers):
        """Return the density of layers brought to the inner faces [kg m-3]."""
        theta, salt = c[layers, TEMPERATURE], c[layers, SALINITY]
        return broadcast(parcel_density)(
            theta, salt, self.pressure, 0.0, 0.0, self.contraction
        )

    def _stability(self, upper, lower):
        """Return buoyancy frequency squared [s-2]."""
        return self.gravity * (lower - upper) / (0.5 * (lower + upper)) / self.step

    def _diffusivity(self, stability):
        """Return turbulent diffusivity at the inner faces and its slope against N^2."""
        case = self.case
        stable = np.maximum(stability, 1e-30)
        free = self.coefficient / np.sqrt(stable)
        diffusivity = np.clip(free, case.least, case.most)
        slope = np.where(free == diffusivity, -0.5 * free / stable, 0.0)
        over = np.exp(np.minimum(stability, 0.0) / self.SCALE)
        diffusivity += self.OVERTURNING * (1.0 - over)
        slope -= np.where(stability < 0.0, self.OVERTURNING * over / self.SCALE, 0.0)
        return diffusivity, slope

    def rate(self, seconds, y):
        """Return dc/dt."""
        c = y.reshape(self.shape)
        upper, lower = self._density(c, slice(None, -1)), self._density(c, slice(1, None))
        turbulent, _ = self._diffusivity(self._stability(upper, lower))
        flux = self.over[:, None] * (turbulent[:, None] + self.molecular) * np.diff(c, axis=0)
        rate = self.moved @ c + self.steady
        rate[:-1] += flux / self.lines.volume[:-1, None]
        rate[1:] -= flux / self.lines.volume[1:, None]
        if self.pull > 0.0:
            rate[0, TEMPERATURE] += self.pull * (
                self.case.equilibrium(seconds) - c[0, TEMPERATURE]
            )
        return rate.ravel()

    @cached_property
    def matrix(self):
        """Return the matrix of a case whose diffusivities are constant."""
        layers, tracers = self.shape
        whole = csc_matrix((layers * tracers, layers * tracers))
        for m in range(tracers):
            diffusivity = np.pad(self.case.least + self.molecular[:, m], 1)
            one = diags([np.arange(tracers) == m], [0], dtype=float)
            whole = whole + kron(self.lines.matrix(diffusivity), one, format="csc")
        return csc_matrix(whole)

    @cached_property
    def _pattern(self):
        """Return where entries of the Jacobian go, and the place of each in its columns."""
        layers, tracers = self.shape
        fixed = kron(self.moved, identity(tracers)).tocoo()
        face, m = np.meshgrid(np.arange(layers - 1), np.arange(tracers), indexing="ij")
        above, below = face * tracers, (face + 1) * tracers
        touched = (above + m, below + m, above, above + 1, below, below + 1)
        rows = [np.broadcast_to(at, m.shape) for at in (above + m, below + m) for _ in touched]
        columns = [*touched, *touched]
        row = np.concatenate([fixed.row, *(r.ravel() for r in rows), [0]])
        column = np.concatenate([fixed.col, *(k.ravel() for k in columns), [0]])
        size = layers * tracers
        key, place = np.unique(column.astype(np.int64) * size + row, return_inverse=True)
        starts = np.searchsorted(key, np.arange(size + 1, dtype=np.int64) * size)
        return fixed.data, key % size, starts, place

    def jacobian(self, _, y):
        """Return the exact Jacobian, but for the mean density that N^2 is divided by."""
        c = y.reshape(self.shape)
        both = (slice(None, -1), slice(1, None))
        upper, lower = (self._density(c, at) for at in both)
        turbulent, slope = self._diffusivity(self._stability(upper, lower))
        steepness = self.over[:, None] * slope[:, None] * np.diff(c, axis=0)
        scale = self.gravity / (0.5 * (lower + upper)) / self.step
        bends = []
        for at, density, sign in ((both[0], upper, -1.0), (both[1], lower, 1.0)):
            for m in (TEMPERATURE, SALINITY):
                nudged = c[:, :2].copy()
                nudged[:, m] += 1e-4
                rise = (self._density(nudged, at) - density) / 1e-4
                bends.append(steepness * (sign * scale * rise)[:, None])
        conducted = self.over[:, None] * (turbulent[:, None] + self.molecular)
        flux = np.array([-conducted, conducted, *bends])
        volume = self.lines.volume[:, None]
        parts = [(flux / volume[:-1]).ravel(), (-flux / volume[1:]).ravel()]
        fixed, row, starts, place = self._pattern
        data = np.bincount(place, np.concatenate([fixed, *parts, [-self.pull]]))
        return csc_matrix((data, row, starts), shape=(y.size, y.size))

    def solve(self, tolerance: float, exact: bool = True):
        """Return processor time [s] and the states at the times of the column's visits.

        ``tolerance`` is in units of the range of each tracer; the Jacobian is handed over
        exactly, or by its sparsity alone.
        """
        case = self.case
        visits = case.years * (VISITS if case.exchange > 0.0 else 1)
        at = np.linspace(0.0, case.years * YEAR, visits + 1)[1:]
        start = self.start.ravel()
        begin = time.process_time()
        rate, jacobian = self.rate, self.jacobian
        if self.constant:
            jacobian, steady = self.matrix, self.steady.ravel()
            rate = lambda _, y: jacobian @ y + steady  # noqa: E731
        known = {"jac": jacobian}
        if not exact:
            matrix = (jacobian if self.constant else jacobian(0.0, start)).copy()
            matrix.data[:] = 1.0
            known = {"jac_sparsity": matrix}
        solved = solve_ivp(
            rate,
            (0.0, at[-1]),
            start,
            method="BDF",
            rtol=RELATIVE_TOLERANCE,
            atol=np.tile(tolerance * np.ptp(self.start, axis=0), self.shape[0]),
            t_eval=at,
            **known,
        )
        spent = time.process_time() - begin
        return spent, solved.y.T.reshape(-1, *self.shape)


def time_at(error: float, runs) -> float:
    """Return the least time [s] at an error among runs (time, error) and between them."""
    least = min((spent for spent, reached in runs if reached <= error), default=np.nan)
    for slow, near in runs:
        for fast, far in runs:
            if near < error < far and fast < slow:
                share = np.log(far / error) / np.log(far / near)
                least = min(least, float(fast * (slow / fast) ** share))
    return least


def tell(case: Case, step_days: float, column, lines: float, tolerances: str) -> None:
    """Print one comparison; ``column`` is (time, error), ``lines`` the time at its error."""
    spent, error = column
    ratio = lines / spent
    kept = "kept" if ratio >= case.goal else "MISSED" if ratio < case.goal else "not reached"
    print(
        f"{case.name}: {case.layers} layers, {len(TRACERS)} tracers, {case.years} years, step"
        f" {step_days:g} d: column {spent:.3f} s, error {error:.1e}; solve_ivp BDF"
        f" {lines:.3f} s at that error ({tolerances}); ratio {ratio:.2f}, goal"
        f" {case.goal:g}: {kept}"
    )


def best_column(case: Case, step_days: float, repeats: int = 3):
    """Return the least time [s] of several runs of the column, and its states."""
    runs = [by_column(case, case.layers, step_days) for _ in range(repeats)]
    return min(spent for spent, _ in runs), runs[0][1]


def smooth(case: Case) -> None:
    """Print the ratios of a smooth case."""
    column = column_for(case, case.layers)
    fine = Equation(case, 4 * case.layers, column)
    reference, volume = fine.solve(1e-7)[1][-1], fine.lines.volume
    span = np.ptp(reference, axis=0)

    def error(states):
        """Return the error of the last state against means of the reference."""
        layers = states.shape[1]
        parts = (layers, len(volume) // layers)
        content = (reference * volume[:, None]).reshape(*parts, -1).sum(axis=1)
        means = content / volume.reshape(parts).sum(axis=1)[:, None]
        return float(np.sqrt(np.mean(((states[-1] - means) / span) ** 2)))

    runs = {}
    for layers in (case.layers // 2, case.layers, 2 * case.layers):
        equation = Equation(case, layers, column)
        runs[layers] = []
        for tolerance in (1e-1, 1e-2, 1e-3, 1e-4, 1e-5):
            spent, states = min(
                (equation.solve(tolerance) for _ in range(2)), key=lambda run: run[0]
            )
            runs[layers].append((spent, error(states)))
    for step_days in (1.0, 5.0, 15.0):
        spent, states = best_column(case, step_days)
        found = (spent, error(states))
        times = {layers: time_at(found[1], some) for layers, some in runs.items()}
        layers = min(times, key=lambda n: np.nan_to_num(times[n], nan=np.inf))
        tell(case, step_days, found, times[layers], f"{layers} layers the fastest")
    equation = Equation(case, case.layers, column)
    sparsity_alone(case, equation, 1e-4)


def seasonal(case: Case) -> None:
    """Print the ratios of the seasonal case."""
    equation = Equation(case, case.layers, column_for(case, case.layers))
    volume, faces = equation.lines.volume[:, None], equation.lines.faces
    upper = volume * np.clip((SURFACE_LAYER - faces[:-1]) / np.diff(faces), 0.0, 1.0)[:, None]

    def integrals(states):
        """Return heat of the lake and contents of its surface layer, (times, 1 + m)."""
        heat = (states[:, :, TEMPERATURE] * volume[:, 0]).sum(axis=1)
        return np.column_stack([heat, (states * upper).sum(axis=1)])

    def apart(states, others):
        """Return how far integrals lie from others, in units of the swing of those."""
        off = (integrals(states) - integrals(others)) / np.ptp(integrals(others), axis=0)
        return float(np.sqrt(np.mean(off**2)))

    by_limit = by_column(case, case.layers, 1.0 / 16.0)[1]
    lines_limit = equation.solve(1e-6)[1]
    print(
        f"{case.name}: the limits of column and lines lie {apart(lines_limit, by_limit):.1e}"
        " apart"
    )
    runs = []
    for tolerance in (1e-1, 3e-2, 1e-2, 3e-3, 1e-3):
        spent, states = equation.solve(tolerance)
        runs.append((spent, apart(states, lines_limit)))
    print(f"{case.name}: lines", ", ".join(f"{t:.2f} s at {e:.1e}" for t, e in runs))
    for step_days in (1.0, 5.0):
        spent, states = best_column(case, step_days, 5)
        found = (spent, apart(states, by_limit))
        tell(case, step_days, found, time_at(found[1], runs), "the same layers")
    sparsity_alone(case, equation, 1e-2)


def sparsity_alone(case: Case, equation: Equation, tolerance: float) -> None:
    """Print how much longer the lines take without the exact Jacobian."""
    exact, _ = equation.solve(tolerance)
    sparse, _ = equation.solve(tolerance, exact=False)
    print(
        f"{case.name}: lines given the sparsity of the Jacobian alone take"
        f" {sparse / exact:.1f} times as long"
    )


def main() -> None:
    """Print the ratios of all cases."""
    fixed = Case("smooth, fixed K", 30, 200, 5.0)
    smooth(fixed)
    stable = replace(
        fixed, name="smooth, K by stability", coefficient=1e-8, least=1e-8, most=5e-5
    )
    smooth(stable)
    seasonal(
        replace(
            stable,
            name="seasonal",
            years=3,
            layers=100,
            goal=20.0,
            stirred=1e-6,
            exchange=30.0,
            fresh=40.0,
        )
    )


if __name__ == "__main__":
    main()
