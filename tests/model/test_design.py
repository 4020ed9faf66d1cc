"""The design: frozen, compared and hashed by value."""

import pytest
from pydantic import ValidationError

from model.design import CLEARANCE, MOST_PARTICLES, Design
from model.evaluate import evaluate
from model.fields.patterns import ChipPatterns


def test_a_design_cannot_be_changed(yeast):
    for part, name in ((yeast, "title"), (yeast.drive, "voltage"), (yeast.chip, "gap")):
        with pytest.raises(ValidationError, match="frozen"):
            setattr(part, name, getattr(part, name))


def test_designs_compare_and_hash_by_value(yeast, vary):
    twin = vary(yeast, {})
    assert twin is not yeast
    assert twin == yeast
    assert hash(twin) == hash(yeast)
    other = vary(yeast, {"particle.0.layers.1.thickness": "221 nm"})
    assert other != yeast
    assert len({yeast, twin, other}) == 2


def test_code_may_name_parts_and_give_si(yeast):
    parts = {name: getattr(yeast, name) for name in Design.model_fields}
    assert Design(**parts) == yeast
    parts["drive"] = yeast.drive.model_copy(update={"voltage": 3.0})
    assert Design(**parts).drive.voltage == 3.0


def test_code_meets_the_same_rules_as_a_person(yeast):
    parts = {name: getattr(yeast, name) for name in Design.model_fields}
    with pytest.raises(ValidationError, match="at least one particle"):
        Design(**{**parts, "particles": ()})
    with pytest.raises(ValidationError, match=f"at most {MOST_PARTICLES}"):
        Design(**{**parts, "particles": (yeast.particles[0],) * 13})
    with pytest.raises(ValidationError, match="name of two particles"):
        Design(**{**parts, "particles": (yeast.particles[0],) * 2})


def test_collected_are_those_of_that_role(yeast, vary):
    assert [particle.name for particle in yeast.collected] == ["viable yeast"]
    both = vary(yeast, {"particle.1.role": "collect"})
    assert both.collected == both.particles


def test_thresholds_are_in_si(yeast):
    assert yeast.threshold("highest_temperature") == pytest.approx(303.15)
    assert yeast.threshold("membrane_voltage") == 0.3


def test_at_the_least_height_everything_is_finite(yeast, vary, patterns):
    lowest = CLEARANCE * yeast.particles[0].equivalent_radius
    design = vary(yeast, {"task.working_height": f"{lowest * 1e6:.6g} um"})
    result = evaluate(design, patterns)
    assert 0.0 < result.floor_pp < float("inf")
    assert result.ceiling_pp > 0.0
    assert result.dielectrophoretic_speed > 0.0


def test_patterns_of_another_chip_are_refused(yeast, vary, patterns):
    assert isinstance(patterns, ChipPatterns)
    with pytest.raises(ValueError, match="another chip"):
        evaluate(vary(yeast, {"chip.gap": "61 um"}), patterns)
