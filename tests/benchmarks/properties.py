"""How fast the properties are: printed, never asserted.

Run from the top of the checkout: ``python tests/benchmarks/properties.py``.  One thread, warm.
"""

import time
from collections.abc import Callable

import numpy as np

from strata import gas, water
from strata.compiled import compiled
from strata.gas.carbonate import carbonate_constants, free_co2
from strata.water.density import parcel_density

N = 1_000_000
LAYERS = 250


@compiled
def parcels(theta, s, p, mass, volume, out):
    """Fill out with densities, as the time loop does."""
    for i in range(theta.size):
        out[i] = parcel_density(theta[i], s[i], p[i], mass[i], volume[i], 0.75e-3)


@compiled
def constants(t, p, k):
    """Fill k with the constants of carbonate."""
    for i in range(t.size):
        k[i, 0], k[i, 1], k[i, 2] = carbonate_constants(t[i], 0.05, p[i])


@compiled
def free(dic, alk, k, h, out):
    """Fill out with free CO2 from a guess as good as the last step's."""
    for i in range(dic.size):
        out[i], _ = free_co2(dic[i], alk[i], k[i, 0], k[i, 1], k[i, 2], h[i])


def seconds(function: Callable[..., object], *arguments: object, repeats: int = 1) -> float:
    """Return the least processor time of three runs of one call, after a warm-up."""
    function(*arguments)
    timings = []
    for _ in range(3):
        start = time.thread_time()
        for _ in range(repeats):
            function(*arguments)
        timings.append((time.thread_time() - start) / repeats)
    return min(timings)


def main() -> None:
    """Time a million parcels by the public functions, and the kernel's scalars per layer."""
    chance = np.random.default_rng(1)
    t, s = chance.uniform(20, 26, N), chance.uniform(1, 6, N)
    dissolved = {
        "CH4": chance.uniform(0, 20, N),
        "CO2": chance.uniform(0, 100, N),
        "N2": chance.uniform(0.3, 0.8, N),
        "H2S": chance.uniform(0, 0.3, N),
    }
    alk = chance.uniform(10, 60, N)
    dic = alk * chance.uniform(1.0, 3.0, N)
    p = chance.uniform(1e5, 4e6, N)
    print(f"{N:,} parcels, one thread")
    cases = [
        ("bubble point, 4 gases, non-ideal (goal 4 s)", gas.bubble_point, (t, s, dissolved)),
        ("carbonate (goal 1 s)", gas.speciate, (t, s, dic, alk)),
        ("flash at 2 bar, 4 gases, non-ideal", gas.flash, (t, s, dissolved, 2e5)),
        ("density with gas", water.density, (t, s, p, dissolved)),
    ]
    for name, function, arguments in cases:
        print(f"  {name:46s} {seconds(function, *arguments):7.3f} s")
    print(f"{LAYERS} layers, compiled loop")
    few = slice(0, LAYERS)
    out, k = np.empty(LAYERS), np.empty((LAYERS, 3))
    constants(t[few], p[few], k)
    guess = gas.speciate(t[few], 3.0, dic[few], alk[few]).h * 1.01
    volume = np.full(LAYERS, 3e-3)
    kernels = [
        ("parcel_density", parcels, (t[few], s[few], p[few], volume, volume, out)),
        ("carbonate_constants", constants, (t[few], p[few], k)),
        ("free_co2 from a guess within 5 %", free, (dic[few], alk[few], k, guess, out)),
    ]
    for name, function, arguments in kernels:
        each = 1e9 * seconds(function, *arguments, repeats=2000) / LAYERS
        print(f"  {name:46s} {each:7.1f} ns each")


if __name__ == "__main__":
    main()
