"""Fields of the layouts seen in plan that must fit one another, and what fills them at first."""

import numpy as np
import pytest

from model.design import Flow
from model.errors import DesignError
from model.evaluate import evaluate
from model.fields.solve import solve_chip
from model.layouts import LAYOUTS
from model.layouts.four_pole import FourPole
from model.layouts.insulating_constriction import InsulatingConstriction
from model.planar import around
from model.profile import document, parse_design
from tests.wishes import wished

UM = 1e-6
PLANS = [name for name, kind in LAYOUTS.items() if kind.view == "plan"]


def misfit(yeast, **chip):
    """Path and problem of the one field that is refused."""
    walls = {key: document(yeast)["chip"][key] for key in ("floor", "lid")}
    with pytest.raises(DesignError) as told:
        parse_design({**document(yeast), "chip": walls | chip})
    (error,) = told.value.errors
    return error.path, error.problem


def test_poles_fit_into_the_channel(yeast):
    """A tip gap of 100 µm puts the tips 35.36 µm from either axis."""
    chip = {"layout": "four-pole", "tip_gap": "100 um", "pole_width": "50 um"}
    path, problem = misfit(yeast, **chip, channel_width="170 um")
    assert path == "chip.channel_width"
    assert "at least 170.71" in problem
    touching = 2 * (100e-6 / np.sqrt(8) + 50e-6)
    assert FourPole(tip_gap=100e-6, pole_width=50e-6, channel_width=touching).section()


@pytest.mark.parametrize(("obstacle", "bound"), [("ridge", "400 µm"), ("post", "200 µm")])
def test_an_obstacle_leaves_an_opening_and_is_there(yeast, obstacle, bound):
    chip = {"layout": "insulating-constriction", "obstacle": obstacle, "channel_width": "400 um"}
    path, problem = misfit(yeast, **chip, opening=bound.replace("µ", "u"))
    assert path == "chip.opening"
    assert bound in problem


def test_electrodes_are_remote(yeast):
    path, problem = misfit(
        yeast,
        layout="insulating-constriction",
        channel_width="1 mm",
        opening="100 um",
        obstacle_length="500 um",
        electrode_spacing="1.4 mm",
    )
    assert path == "chip.electrode_spacing"
    assert "1500 µm" in problem or "1.5 mm" in problem


@pytest.mark.parametrize("name", PLANS)
def test_a_layout_in_plan_can_be_chosen_on_screen(yeast, name):
    """Every field of its own has a value to begin with, which fits the rest."""
    opened, _ = wished(yeast, "turn", "chip", name)
    assert opened.problems == ()
    assert opened.design.chip.layout == name
    assert opened.design.chip.channel_width == yeast.chip.channel_width


def test_terminals_and_openings():
    assert FourPole().terminals == 2
    assert FourPole(drive="quadrature").terminals == 4
    assert FourPole(tip_gap=80e-6).narrowest == pytest.approx(50e-6)  # the depth
    assert FourPole(tip_gap=40e-6).narrowest == pytest.approx(40e-6 / np.sqrt(2))
    ridge = InsulatingConstriction(opening=30e-6)
    assert ridge.narrowest == 30e-6
    assert ridge.force_level(1e-6) == 0.0
    post = InsulatingConstriction(opening=30e-6, obstacle="post")
    assert post.force_level(1e-6) == pytest.approx(0.5 * post.channel_width - 15e-6)


@pytest.mark.parametrize("corners", [3, 4, 50])
def test_places_around_a_polygon(corners):
    """Length of the parallel curve: that of the outline and 2π times the distance."""
    turns = np.linspace(0, 2 * np.pi, corners, endpoint=False)
    outline = np.stack([2 * np.cos(turns), np.sin(turns)], axis=-1)
    x, y = around(outline, 0.7)
    found = np.hypot(x - np.roll(x, 1), y - np.roll(y, 1)).sum()
    own = np.hypot(*(outline - np.roll(outline, 1, axis=0)).T).sum()
    assert found == pytest.approx(own + 2 * np.pi * 0.7, rel=3e-3)


@pytest.mark.parametrize(("obstacle", "opening"), [("ridge", 60e-6), ("post", 120e-6)])
def test_the_flow_that_a_force_is_held_against_passes_the_opening(yeast, vary, obstacle, opening):
    """Twice the flow asks for twice the force, and the same liquid passes every cross-section.

    Between the ridges of a channel that is much shallower than wide the mean speed is the flow
    rate over depth and opening; at mid-depth the parabola gives 3/2 of the mean.
    """
    chip = InsulatingConstriction(
        obstacle=obstacle,
        opening=opening,
        obstacle_length=400e-6,
        channel_width=600e-6,
        depth=10e-6,
    )
    changes = {"task.working_height": "5 um", "particle.0.radius": "1.5 um"}
    design = vary(yeast, changes | {"flow.rate": "0.1 uL/min"}).model_copy(update={"chip": chip})
    patterns = solve_chip(chip)
    once, twice = (
        evaluate(design.model_copy(update={"flow": Flow(rate=rate)}), patterns)
        for rate in (1e-12, 2e-12)
    )
    assert twice.point.flow_speed(5e-6) == pytest.approx(2.0 * once.point.flow_speed(5e-6))
    assert twice.floor_pp == pytest.approx(2.0**0.5 * once.floor_pp)
    fastest = patterns.line(chip.force_level(5e-6)).through[0].max() * 1e-12
    openings = 1 if obstacle == "ridge" else 2
    # the post's opening is narrow at one place only, and the sides slow the liquid by some depths
    assert fastest == pytest.approx(1e-12 / (10e-6 * opening * openings), rel=0.12)
    assert 1e-12 / (10e-6 * 600e-6) < once.point.flow_speed(5e-6) / 1.5 <= fastest
