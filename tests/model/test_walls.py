"""Floor and lid: what a person may give, and what holds their outside."""

import pytest
from pydantic import ValidationError

from model.errors import DesignError
from model.profile import document, parse_design
from model.walls import MATERIALS, Wall


def wall(**given):
    return Wall(**{"material": "glass", "thickness": 1e-3, "outside": "held"} | given)


def test_outsides_and_their_coefficients():
    assert wall().heat_transfer is None
    assert wall(outside="insulated").heat_transfer == 0.0
    assert 5.0 <= wall(outside="still-air").heat_transfer <= 25.0  # common practice, no source
    assert wall(outside="transfer", heat_transfer_coefficient=80.0).heat_transfer == 80.0
    # kept while another outside is tried, without effect
    assert wall(heat_transfer_coefficient=80.0).heat_transfer is None


def test_a_missing_coefficient_is_told_at_its_field(yeast):
    with pytest.raises(ValidationError, match="heat_transfer_coefficient must be given"):
        wall(outside="transfer")
    data = document(yeast)
    for face in ("floor", "lid"):
        data["chip"][face]["outside"] = "transfer"
    with pytest.raises(DesignError) as told:
        parse_design(data)
    paths = {error.path for error in told.value.errors}
    assert paths == {f"chip.{face}.heat_transfer_coefficient" for face in ("floor", "lid")}


def test_a_cooled_outside_is_read_with_units_and_written_back(yeast, vary):
    changes = {"chip.lid.outside": "transfer", "chip.lid.heat_transfer_coefficient": "0.2 W/cm^2/K"}
    design = vary(yeast, changes)
    assert design.chip.lid.heat_transfer == pytest.approx(2000.0)
    assert parse_design(document(design)) == design


@pytest.mark.parametrize("coefficient", ["0.5 W/m^2/K", "2e5 W/m^2/K", "10 W/m/K"])
def test_coefficients_out_of_range_or_of_another_kind(yeast, vary, coefficient):
    with pytest.raises(DesignError, match="heat_transfer_coefficient"):
        vary(yeast, {"chip.lid.heat_transfer_coefficient": coefficient})


def test_heat_capacities():
    # density times specific heat, rounded handbook values from memory: kg/m³, J/(kg K)
    handbook = {
        "glass": (2230, 830),
        "fused-silica": (2200, 740),
        "silicon": (2330, 705),
        "pmma": (1180, 1460),
        "pdms": (970, 1460),
        "coc": (1020, 1370),
    }
    assert handbook.keys() == MATERIALS.keys()
    for material, (density, specific) in handbook.items():
        assert wall(material=material).heat_storage == pytest.approx(density * specific, rel=0.02)
    assert wall(heat_capacity=3e6).heat_storage == 3e6
