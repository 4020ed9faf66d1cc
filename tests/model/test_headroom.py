"""Headroom over frequency and conductivity, its best point, and what moves it."""

import numpy as np
import pytest

from model import evaluate, load_profile, solve_chip
from model.headroom import best_point, headroom_map
from model.profile import document, parse_design
from model.sensitivity import sensitivities
from webapp.services import DEMO_PROFILES


@pytest.fixture(scope="module")
def design():
    return load_profile(DEMO_PROFILES / "rinse-water-yeast.toml")


@pytest.fixture(scope="module")
def patterns(design):
    return solve_chip(design.chip)


def moved(design, **change):
    """The design at another operating point."""
    liquid = design.liquid.model_copy(update={"conductivity": change.pop("conductivity")})
    drive = design.drive.model_copy(update=change)
    return design.model_copy(update={"liquid": liquid, "drive": drive})


def test_map_is_what_evaluate_finds_one_by_one(design, patterns):
    frequency, conductivity = np.geomspace(1e4, 3e7, 7), np.geomspace(2e-3, 0.5, 5)
    found = headroom_map(design, patterns, frequency, conductivity)
    for voltage in (2.0, 11.0):
        rms = voltage / np.sqrt(8)
        headroom, binding = found.headroom(rms), found.binding(rms)
        for i, sigma in enumerate(conductivity):
            for j, one in enumerate(frequency):
                at = moved(design, conductivity=sigma, frequency=one, voltage=voltage)
                result = evaluate(at, patterns)
                assert headroom[i, j] == pytest.approx(result.binding.headroom, rel=1e-9)
                bound = found.bounds[binding[i, j]]
                worst = [row for row in result.ledger if row.headroom <= headroom[i, j] * 1.000001]
                assert (bound.id, bound.subject) in {
                    (row.rule.id, row.rule.law.subject) for row in worst
                }


def test_best_point_against_many_points(design, patterns):
    best = best_point(evaluate(design, patterns))
    there = moved(
        design, conductivity=0.02, frequency=best.frequency, voltage=round(best.voltage, 6)
    )
    result = evaluate(there, patterns)
    assert result.inside
    assert result.binding.headroom == pytest.approx(best.headroom, rel=1e-5)
    draw = np.random.default_rng(3)
    for one, voltage in zip(
        10 ** draw.uniform(4, 8, 200), 10 ** draw.uniform(0, 1.5, 200), strict=True
    ):
        other = moved(design, conductivity=0.02, frequency=one, voltage=voltage)
        # a little more may lie between two frequencies of the spectrum
        assert evaluate(other, patterns).binding.headroom <= 1.001 * best.headroom


def test_no_best_point_where_there_is_no_corridor(design, patterns):
    flow = design.flow.model_copy(update={"rate": 1e-9})
    assert best_point(evaluate(design.model_copy(update={"flow": flow}), patterns)) is None


def test_best_point_of_liquid_at_rest(design, patterns):
    flow = design.flow.model_copy(update={"rate": 0.0})
    best = best_point(evaluate(design.model_copy(update={"flow": flow}), patterns))
    assert best.headroom == pytest.approx(4.0)


def test_elasticities_of_holding(design, patterns):
    # Headroom is V over the floor, V_min² = drag/(pull per V²): drag goes with the flow, pull with
    # the duty; and the threshold of a limit that does not bind moves nothing.
    result = evaluate(design, patterns)
    assert result.binding.rule.id == "hold"
    found = {one.path: one.elasticity for one in sensitivities(result)}
    assert found["drive.voltage"] == pytest.approx(1.0, rel=1e-3)
    assert found["flow.rate"] == pytest.approx(-0.5, rel=1e-3)
    assert found["drive.duty"] == pytest.approx(0.5, rel=1e-3)
    assert not any(path.startswith("limits") for path in found)
    sizes = [abs(one.elasticity) for one in sensitivities(result)]
    assert sizes == sorted(sizes, reverse=True)


def test_elasticities_of_warmth(design, patterns):
    # ΔT ∝ σV²: the voltage allowed goes with the root of the threshold, and as −½ with σ.
    data = document(design)
    data["limits"]["temperature_rise"] = "0.05 K"
    result = evaluate(parse_design(data), patterns)
    assert result.binding.rule.id == "temperature_rise"
    found = {one.path: one.elasticity for one in sensitivities(result)}
    assert found["drive.voltage"] == pytest.approx(-1.0, rel=1e-3)
    assert found["limits.temperature_rise"] == pytest.approx(0.5, rel=5e-3)
    assert found["liquid.conductivity"] == pytest.approx(-0.5, rel=5e-3)
