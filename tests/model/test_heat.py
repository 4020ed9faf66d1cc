"""Heat of a whole design: the rise that drives itself on, the time it takes, and the flow."""

import numpy as np
import pytest

from model.evaluate import evaluate
from model.fields.solve import solve_chip

#: A chip whose heat leaves evenly and slowly: the liquid is as warm everywhere. Its walls carry no
#: current, whose heat would come on top of the liquid's.
POOR = {
    "chip.floor": {
        "material": "silicon",
        "thickness": "20 um",
        "outside": "transfer",
        "heat_transfer_coefficient": "40 W/m^2/K",
        "conductivity": "0 S/m",
    },
    "chip.lid": {
        "material": "silicon",
        "thickness": "20 um",
        "outside": "insulated",
        "conductivity": "0 S/m",
    },
    "liquid.temperature": "25 degC",
}
STORAGE = 997.0476 * 4181.32  # J/(m³ K), water at 25 °C, IAPWS-95


@pytest.fixture(scope="module")
def poor(yeast, vary):
    design = vary(yeast, POOR)
    patterns = solve_chip(design.chip, design.liquid.heat_conductivity)
    return lambda **changes: evaluate(
        vary(design, {key.replace("__", "."): value for key, value in changes.items()}), patterns
    )


def row(result, limit):
    return next(row for row in result.ledger if row.rule.id == limit)


def heated_area(chip):
    """Floor under all gaps, m²."""
    return (chip.bar_count - 1) * (chip.bar_width + chip.gap) * chip.channel_width


def test_evenly_warm_liquid_loses_its_steady_state_at_a_rise_of_one_over_c(poor):
    """P(1 + cΔT) = hAΔT: ΔT₀ = P/(hA), no steady state from cΔT₀ = 1 on; circuit theory."""
    for volts in (1.0, 3.0):
        result = poor(drive__voltage=f"{volts} V")
        loss = 40.0 * heated_area(result.design.chip)
        first = result.load.power / loss
        assert result.temperature_rise == pytest.approx(first, rel=2e-3)
        steady = result.load.power / (loss - 0.02 * result.load.power)
        assert result.self_consistent_rise == pytest.approx(steady, rel=5e-3)
    limit = 3.0 * np.sqrt(1.0 / (0.02 * result.temperature_rise))
    assert poor(drive__voltage=f"{0.995 * limit} V").self_consistent_rise > 1e3
    beyond = poor(drive__voltage=f"{1.01 * limit} V")
    assert beyond.self_consistent_rise is None
    assert row(beyond, "temperature_rise").value == np.inf
    assert not beyond.inside


def test_ceilings_of_temperature_meet_the_self_consistent_rise(results, vary):
    for result in results.values():
        for limit in ("temperature_rise", "highest_temperature"):
            found = row(result, limit)
            at = evaluate(
                vary(result.design, {"drive.voltage": f"{found.bound_pp:.10g} V"}), result.patterns
            )
            offset = found.rule.law.offset
            assert at.self_consistent_rise == pytest.approx(found.allowed - offset, rel=1e-7)
            # a voltage that is held drives it on; before an opening the current is held instead
            grown = at.self_consistent_rise - at.temperature_rise
            assert grown * np.sign(at.point.heat_growth[0]) > 0.0


def test_field_gives_way_to_warmth_below_the_charge_relaxation_frequency_alone(yeast, patterns):
    """κ = d ln ε̃/dT from differences of ε̃ = ε − jσ/ω itself."""
    result = evaluate(yeast, patterns, np.geomspace(1e3, 1e9, 13))
    at, liquid = result.spectrum, result.point.liquid
    step = 1e-4

    def medium(kelvin):
        permittivity = liquid.permittivity * np.exp(liquid.permittivity_slope * kelvin)
        conductivity = at.conductivity * np.exp(liquid.conductivity_slope * kelvin)
        return np.log(permittivity - 1j * conductivity / at.omega)

    yielding = ((medium(step) - medium(-step)) / (2 * step)).real
    found = patterns.feedback
    expected = found.direct * liquid.conductivity_slope + found.spread * yielding
    np.testing.assert_allclose(at.heat_growth, expected, rtol=1e-6)
    assert found.direct > 0.0 > found.spread


def test_duty_is_a_lower_voltage_to_the_heat(yeast, patterns, vary):
    half = evaluate(vary(yeast, {"drive.voltage": "40 V", "drive.duty": 0.5}), patterns)
    lower = evaluate(vary(yeast, {"drive.voltage": f"{40 / np.sqrt(2):.10g} V"}), patterns)
    assert half.self_consistent_rise == pytest.approx(lower.self_consistent_rise)
    assert half.warm_up_time == lower.warm_up_time
    assert half.flow_cooling.peclet == pytest.approx(lower.flow_cooling.peclet)
    assert half.flow_cooling.outlet_rise == pytest.approx(lower.flow_cooling.outlet_rise)


def test_no_growth_without_a_conductivity_that_grows(yeast, patterns, vary):
    design = vary(yeast, {"liquid.conductivity_per_kelvin": "0 %/K", "drive.voltage": "100 V"})
    result = evaluate(design, patterns)
    assert result.self_consistent_rise == pytest.approx(result.temperature_rise, rel=1e-3)


def test_warm_up_of_a_liquid_on_a_cold_floor(yeast, vary):
    """A slab held on one face: 63 % of the mean after 0.399·ρcl²/k; Carslaw and Jaeger 3.14."""
    design = vary(
        yeast,
        {
            "chip.floor": {"material": "silicon", "thickness": "1 um", "outside": "held"},
            "chip.lid": {"material": "coc", "thickness": "1 um", "outside": "insulated"},
            "liquid.temperature": "25 degC",
        },
    )
    patterns = solve_chip(design.chip, design.liquid.heat_conductivity)
    soon, late = evaluate(design, patterns).warm_up_time
    diffusion = STORAGE * design.chip.height**2 / 0.6065
    assert soon == pytest.approx(0.399 * diffusion, rel=0.02)
    assert late / soon == pytest.approx(3.0, rel=0.02)  # nearly one exponential


def test_warm_up_of_evenly_warm_liquid(poor):
    """What liquid and walls store per area over h: 63 % after once, 95 % after three times that."""
    stored = STORAGE * 100e-6 + 2 * 1.64e6 * 20e-6  # floor and lid of silicon
    soon, late = poor().warm_up_time
    assert soon == pytest.approx(stored / 40.0, rel=5e-3)
    assert late == pytest.approx(np.log(20.0) * stored / 40.0, rel=5e-3)


def test_heat_that_the_flow_carries(poor):
    """Pe = ρ c_p Q/(hA), outlet P/(ρ c_p Q)."""
    result = poor(flow__rate="3 uL/min")
    carried = STORAGE * 3e-9 / 60.0  # W/K
    flow = result.flow_cooling
    assert flow.outlet_rise == pytest.approx(result.load.power / carried, rel=1e-3)
    assert flow.peclet == pytest.approx(
        carried / (40.0 * heated_area(result.design.chip)), rel=3e-3
    )
    faster = poor(flow__rate="30 uL/min").flow_cooling
    assert faster.peclet == pytest.approx(10.0 * flow.peclet)
    assert faster.outlet_rise == pytest.approx(0.1 * flow.outlet_rise)
    assert poor(flow__rate="0 uL/min").flow_cooling is None
