"""The riser: the published CO2 lake, single-phase pipes, choking, balance of forces."""

import math
from dataclasses import replace

import numpy as np
import pytest

from strata.errors import ComputationError
from strata.plant import riser as riser_module
from strata.plant.plan import Riser
from strata.plant.riser import lift, pump_pressure

# Halbwachs et al. 2004 (Eos 85: 281): one pipe of 0.145 m bore (recalled) from 203 m in Lake
# Nyos, in January 2001; 63-70 L/s of water.  CO2 0.366 mol/kg at 203 m (after Evans et al.
# 1993 and Kusakabe et al. 2008), 25.3 degC, air 0.89 bar.
AIR = 0.89e5
GASES = {"CO2": 0.366 * 997.0, "N2": 0.4}
PIPE = Riser(0.145)
FOOT = AIR + 9.78 * 1000.0 * 203.0


def nyos(flow=None, riser=PIPE, outlet=AIR, gases=GASES):
    return lift(riser, 203.0, 25.3, 1.0, gases, outlet, FOOT, flow, gravity=9.78)


def test_the_self_lifted_flow_of_the_published_lake():
    riser = nyos()
    assert 63e-3 * 0.85 < riser.flow < 70e-3 * 1.15
    # the jet is gas to about nine tenths of its volume flow, same source; +-0.05
    assert riser.outlet_gas_share == pytest.approx(0.9, abs=0.05)
    assert riser.startup_pressure >= 0.0
    assert 0.0 < riser.bubble_depth < 203.0


def test_the_self_lifted_flow_needs_no_pump_and_more_flow_does():
    own = nyos().flow
    assert nyos(own).pump_pressure == pytest.approx(0.0, abs=200.0)  # Pa, of 20 bar
    assert nyos(1.2 * own).pump_pressure > 0.0
    assert nyos(0.8 * own).pump_pressure < 0.0
    single = pump_pressure(PIPE, 203.0, 25.3, 1.0, GASES, AIR, FOOT, 1.2 * own, gravity=9.78)
    # it looks at fewer pressures on the way
    assert single == pytest.approx(nyos(1.2 * own).pump_pressure, rel=2e-3)


def test_the_pressure_of_a_pump_does_not_hang_on_the_points_looked_at(monkeypatch):
    def pumped(points):
        monkeypatch.setattr(riser_module, "FEW_POINTS", points)
        arguments = (PIPE, 203.0, 25.3, 1.0, GASES, AIR, FOOT, 0.06)
        return pump_pressure(*arguments, gravity=9.78)

    best = pumped(801)
    errors = [abs(pumped(points) - best) for points in (13, 26, 51)]
    assert errors[1] < 3e-5 * FOOT
    assert errors[0] > 2.0 * errors[1] > 4.0 * errors[2]


def test_water_without_gas_flows_as_in_a_plain_pipe():
    # Pressure at the top = at the foot - rho g L - (f L / D + 1.5) rho u^2 / 2, f by Haaland.
    flow, gases = 0.02, {"CO2": 1.0}
    speed = flow / (math.pi * 0.145**2 / 4)
    riser = nyos(flow, gases=gases)
    rho, viscosity = 997.8, 0.884e-3  # water at 25.3 degC with 1 g/kg, 0.89 bar
    reynolds = rho * speed * 0.145 / viscosity
    friction = (-1.8 * math.log10((5e-5 / 0.145 / 3.7) ** 1.11 + 6.9 / reynolds)) ** -2
    lost = (friction * 203.0 / 0.145 + 1.5) * rho * speed**2 / 2
    expected = AIR + rho * 9.78 * 203.0 + lost - FOOT
    assert riser.pump_pressure == pytest.approx(
        expected, abs=300.0
    )  # 1e-4 of 20 bar, in density
    assert riser.outlet_void == 0.0
    assert riser.bubble_depth == 0.0
    # a lake as light as the water in the pipe lifts none of it
    foot = AIR + 9.78 * 997.0 * 203.0
    with pytest.raises(ComputationError, match="lifts no flow"):
        lift(PIPE, 203.0, 25.3, 1.0, gases, AIR, foot, gravity=9.78)


def test_a_wide_throat_chokes_at_a_low_outlet_pressure():
    free = nyos(0.2)
    assert free.choked
    assert free.outlet_pressure > AIR
    # a choked flow does not feel what is beyond its outlet
    lower = nyos(0.2, outlet=0.5 * AIR)
    assert lower.pump_pressure == pytest.approx(free.pump_pressure, rel=0.01)
    assert lower.outlet_pressure == pytest.approx(free.outlet_pressure, rel=0.05)


def test_forces_balance_along_the_pipe():
    # dP/dz = -(weight + friction) - d(momentum)/dz, from the profile that is given out.
    riser = nyos()
    order = np.argsort(-riser.depth)
    height = -riser.depth[order]
    pressure, void = riser.pressure[order], riser.void[order]
    area = math.pi * 0.145**2 / 4
    water = riser.flow / area
    gas = void * riser.gas_velocity[order]
    gas_density = 44.01e-3 * pressure / (8.314 * 298.45)
    weight = 9.78 * (997.0 * (1 - void) + gas_density * void)
    both = water + gas
    friction = -1.8 * np.log10(
        (5e-5 / 0.145 / 3.7) ** 1.11 + 6.9 * 0.89e-3 / (997 * both * 0.145)
    )
    drag = friction**-2 * 997.0 * water * both / (2 * 0.145)
    momentum = 997.0 * water * riser.water_velocity[order]
    momentum = momentum + gas_density * gas * riser.gas_velocity[order]
    middle = slice(5, -3)
    left = np.gradient(pressure, height)[middle]
    right = -(weight + drag + np.gradient(momentum, height))[middle]
    # 5 %: ideal gas and differences of the profile here
    np.testing.assert_allclose(left, right, rtol=0.05)


def test_gas_goes_faster_than_water_and_void_grows_upward():
    riser = nyos()
    assert np.all(np.diff(riser.void) >= -1e-12)
    assert np.all(riser.gas_velocity[2:] > riser.water_velocity[2:])
    assert riser.depth[-1] == pytest.approx(0.0, abs=0.05)  # it just reaches the separator


def test_a_higher_separator_lowers_the_flow_and_a_wider_pipe_raises_it():
    base = nyos().flow
    assert nyos(riser=replace(PIPE, separator_height=10.0)).flow < base
    assert nyos(riser=replace(PIPE, separator_height=-10.0)).flow > base
    assert nyos(riser=replace(PIPE, bore=0.2)).flow > base * (0.2 / 0.145) ** 2
    assert nyos(riser=replace(PIPE, pipes=3)).flow == pytest.approx(3 * base, rel=1e-9)
    assert nyos(riser=replace(PIPE, roughness=2e-4)).flow < base


def test_pressure_in_the_separator_holds_the_flow_back():
    assert nyos(outlet=2e5).flow < nyos(outlet=1.5e5).flow < nyos().flow


def test_gas_that_comes_out_below_the_intake_is_in_the_pipe_from_its_foot():
    # held back at the foot to well below the pressure of the first bubble, 11.6 bar of CO2
    foot = AIR + 9.78 * 1000.0 * 60.0
    pipe = lift(PIPE, 60.0, 25.3, 1.0, GASES, AIR, foot, 0.03, gravity=9.78)
    assert pipe.bubble_pressure > foot
    assert pipe.bubble_depth == 60.0
    assert pipe.depth[0] == 60.0
    assert np.all(np.diff(pipe.depth) < 0.0)
    assert np.all(np.diff(pipe.pressure) < 0.0)
    assert 0.0 < pipe.void[0] < pipe.void[1]
    assert pipe.pressure[0] < pipe.bubble_pressure
    assert pipe.pump_pressure < 0.0
