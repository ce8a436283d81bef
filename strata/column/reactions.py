"""What is made and used up in the water, each reaction by an extent that overdraws nothing.

Oxidation of methane, CH4 + 2 O2 -> CO2 + 2 H2O (Monod in both); of sulfide, H2S + 2 O2 -> SO4
+ 2 H (second order); respiration, O2 -> CO2 (Monod in oxygen); uptake and sinking of phosphate
in the surface layer (first order); first-order loss of any tracer; reduction of free CO2 to
methane, CO2 + 4 H2 -> CH4 + 2 H2O (first order, alkalinity kept).
"""

from strata.column.gases import refresh_co2
from strata.column.tracers import ALKALINITY, DIC, METHANE, OXYGEN, PHOSPHATE, SULFIDE
from strata.compiled import compiled

RESPIRATION_HALF_OXYGEN = 0.005  # mol m-3; order of 2-10 umol/L, common practice, no source


@compiled
def _monod(amount, half):
    """Return the share of its largest rate at which a reaction runs."""
    return amount / (half + amount)


@compiled
def _extent(limit, fuel, oxygen, per_oxygen, half_fuel, half_oxygen, second_order):
    """Return the extent x of a reaction in one step [mol m-3], with all amounts at its end.

    Solves x = limit * f(fuel - x) * g(oxygen - per_oxygen x), f and g being Monod shares, or
    the amounts themselves where ``second_order``.  The right side falls with x, so there is
    one root; Newton's method from above, by bisection where it leaves the bracket.
    """
    low, high = 0.0, min(fuel, oxygen / per_oxygen)
    x = high
    for _ in range(100):
        rest, air = fuel - x, oxygen - per_oxygen * x
        if second_order:
            rate = limit * rest * air
            slope = 1.0 + limit * (air + per_oxygen * rest)
        else:
            f, g = _monod(rest, half_fuel), _monod(air, half_oxygen)
            rate = limit * f * g
            slope = 1.0 + limit * (
                g * half_fuel / (half_fuel + rest) ** 2
                + per_oxygen * f * half_oxygen / (half_oxygen + air) ** 2
            )
        if rate > x:
            low = x
        else:
            high = x
        step = (x - rate) / slope
        x = x - step if low <= x - step <= high else 0.5 * (low + high)
        if abs(step) <= 1e-14 * high or high - low <= 1e-14 * high:
            break
    return x


@compiled
def react(values, rates, surface_depth, face, volume, dt, books):
    """Let the reactions of one step run and add what they changed to ``books`` (m).

    ``rates`` is (largest methane oxidation, half methane, half oxygen, sulfide oxidation,
    oxygen demand, phosphate removal), SI.
    """
    for i in range(values.shape[0]):
        oxygen = values[i, OXYGEN]
        if oxygen > 1e-9:
            if rates[0] > 0.0 and values[i, METHANE] > 1e-12:
                x = _extent(
                    rates[0] * dt, values[i, METHANE], oxygen, 2.0, rates[1], rates[2], False
                )
                _book(values, books, i, METHANE, -x, volume[i])
                _book(values, books, i, OXYGEN, -2.0 * x, volume[i])
                _book(values, books, i, DIC, x, volume[i])
            if rates[3] > 0.0 and values[i, SULFIDE] > 1e-12:
                x = _extent(
                    rates[3] * dt, values[i, SULFIDE], values[i, OXYGEN], 2.0, 1.0, 1.0, True
                )
                _book(values, books, i, SULFIDE, -x, volume[i])
                _book(values, books, i, OXYGEN, -2.0 * x, volume[i])
                _book(values, books, i, ALKALINITY, -2.0 * x, volume[i])
            if rates[4] > 0.0:
                have, half = values[i, OXYGEN], RESPIRATION_HALF_OXYGEN
                # x = limit (have - x) / (half + have - x), the root below both
                limit = rates[4] * dt
                b = half + have + limit
                x = 2.0 * limit * have / (b + (b * b - 4.0 * limit * have) ** 0.5)
                _book(values, books, i, OXYGEN, -x, volume[i])
                _book(values, books, i, DIC, x, volume[i])
        if rates[5] > 0.0 and face[i] < surface_depth:
            share = rates[5] * dt / (1.0 + rates[5] * dt)
            _book(values, books, i, PHOSPHATE, -share * values[i, PHOSPHATE], volume[i])


@compiled
def decay(values, rates, volume, dt, books):
    """Let every tracer decay for one step at the rates of its layer, (n, m) [s-1]."""
    for i in range(values.shape[0]):
        for m in range(values.shape[1]):
            if rates[i, m] > 0.0:
                share = rates[i, m] * dt / (1.0 + rates[i, m] * dt)
                _book(values, books, i, m, -share * values[i, m], volume[i])


@compiled
def reduce_carbon(values, rates, constants, hydrogen, volume, dt, books):
    """Turn free CO2 into methane for one step at the rate of each layer [s-1]."""
    for i in range(values.shape[0]):
        if rates[i] > 0.0 and values[i, DIC] > 0.0:
            co2 = refresh_co2(values, constants, hydrogen, i)
            x = rates[i] * dt / (1.0 + rates[i] * dt) * co2
            _book(values, books, i, DIC, -x, volume[i])
            _book(values, books, i, METHANE, x, volume[i])


@compiled
def _book(values, books, layer, tracer, change, volume):
    """Change one value and write the amount into the books."""
    values[layer, tracer] += change
    books[tracer] += change * volume
