"""Heat that raises the conductivity that makes it: against exact relations and a full solution.

Between electrodes that are ideal heat sinks, with insulating walls, the relation of Kohlrausch
1900 holds for any σ(T): ∫dT/σ(T)·k is (V²/4 − φ²)/2 whatever the shape. With σ₀(1 + cΔT) the
hottest rise is ΔT = (exp(cΔT₀) − 1)/c, ΔT₀ = σ₀V²/(8k), of which the second order is cΔT₀²/2; its
two parts are derived here.
"""

from functools import partial

import numpy as np
import pytest
from skfem import Basis, BilinearForm, ElementQuad2, FacetBasis, LinearForm, condense, solve
from skfem.helpers import dot, grad

from model.fields.assembly import space
from model.fields.cells import Cells
from model.fields.electric import solve_potential
from model.fields.feedback import solve_feedback
from model.fields.heat import Cooling, LiquidHeat, conduction
from model.fields.piecewise import Piecewise
from model.growth import self_consistent
from model.layouts.bars_under_plate import BarsUnderPlate
from model.layouts.coplanar_bars import CoplanarBars
from model.layouts.facing_bars import FacingBars
from model.layouts.four_phase_bars import FourPhaseBars
from model.walls import Wall

UM = 1e-6
K = 0.6  # W/(m K), of the liquid
C = 0.02  # relative rise of σ per kelvin


def chip(kind=CoplanarBars, **more):
    size = {"bar_width": 30 * UM, "gap": 50 * UM, "channel_height": 60 * UM}
    return kind(**(size | {"channel_width": 2e-3, "bar_count": 20} | more))


CHIPS = {
    "coplanar": chip,
    "plate": partial(chip, BarsUnderPlate),
    "aligned": partial(chip, FacingBars),
    "staggered": partial(chip, FacingBars, offset=40 * UM),
    "offset": partial(chip, FacingBars, offset=17 * UM),
}


def solved(mesh, section, liquid, conductivity, cooling):
    """Θ_max and the feedback, of the liquid's mesh or the whole section's."""
    functions = space(section.liquid(), 8, 12, section.joined)
    whole = space(section.liquid(), 8, 16, section.joined)
    potentials = [solve_potential(whole, held) for held in section.potentials]
    fields = np.stack([-functions.gradients(potential.solution) for potential in potentials])
    heat = LiquidHeat(
        conduction(space(mesh, 4, 12, section.joined), conductivity, cooling), liquid, K
    )
    warmth = heat.solve(np.einsum("fckq,fckq->kq", fields, fields))
    temperature = Piecewise.of(heat.functions, warmth[None], Cells.of(mesh))
    found = solve_feedback(functions, potentials, fields, heat, temperature, warmth)
    return float(temperature.highest(liquid)[0]), found


def within_walls(section):
    conductivity = np.full(section.mesh.nelements, K)
    for name, value in section.wall_conductivities.items():
        conductivity[section.mesh.subdomains[name]] = value
    liquid = section.mesh.subdomains["liquid"]
    return solved(section.mesh, section, liquid, conductivity, Cooling(section.outsides))


@pytest.mark.parametrize("name", CHIPS)
def test_between_isothermal_electrodes(name):
    """Θ₂ = f(φ), f″ = −(1/4 − φ²)/2: f(0) = 5/6·Θ_max²; the field gives back 1/3 of Θ_max²."""
    section = CHIPS[name]().section()
    mesh = section.liquid()
    cells = np.arange(mesh.nelements)
    cooling = Cooling(dict.fromkeys(section.electrodes))
    highest, found = solved(mesh, section, cells, np.full(cells.size, K), cooling)
    assert highest == pytest.approx(1 / 8, rel=2e-4)
    assert found.direct == pytest.approx(5 / 6, rel=1e-4)
    assert found.spread == pytest.approx(-1 / 3, rel=1e-4)
    assert found.growth(C, C) == pytest.approx(C / 2, rel=1e-4)


def test_evenly_warm_liquid_runs_away():
    """Heat that leaves only through a poor outside: ΔT = ΔT₀(1 + cΔT), none from cΔT₀ = 1."""
    poor = Wall(material="silicon", thickness=10 * UM, outside="transfer",
                heat_transfer_coefficient=1.0)  # fmt: skip
    closed = Wall(material="glass", thickness=700 * UM, outside="insulated")
    _, found = within_walls(chip(floor=poor, lid=closed).section())
    assert found.direct == pytest.approx(1.0, abs=1e-4)
    assert found.spread == pytest.approx(0.0, abs=1e-5)
    growth = found.growth(C, C)
    assert self_consistent(0.5 / C, growth) == pytest.approx(1.0 / C, rel=1e-3)
    assert self_consistent(1.001 / C, growth) == np.inf


def full_solution(section):
    """ΔT_max against ΔT₀ of the whole nonlinear problem, by fixed-point steps of another solver."""
    mesh, liquid = section.mesh, section.mesh.subdomains["liquid"]
    every = Basis(mesh, ElementQuad2(), intorder=6)
    wet = Basis(mesh, ElementQuad2(), intorder=6, elements=liquid)

    @BilinearForm
    def weighted(u, v, w):
        return w.weight * dot(grad(u), grad(v))

    @BilinearForm
    def film(u, v, w):
        return w.transfer * u * v

    @LinearForm
    def warming(v, w):
        return w.weight * dot(grad(w.phi), grad(w.phi)) * v

    names = {"liquid": K, **section.wall_conductivities}
    conducting = sum(
        weighted.assemble(Basis(mesh, ElementQuad2(), elements=mesh.subdomains[name]), weight=k)
        for name, k in names.items()
    )
    for name, transfer in section.outsides.items():
        if transfer:
            side = FacetBasis(mesh, ElementQuad2(), facets=mesh.boundaries[name])
            conducting = conducting + film.assemble(side, transfer=transfer)
    cold = [every.get_dofs(name).all() for name, h in section.outsides.items() if h is None]
    outside = np.setdiff1d(np.arange(every.N), np.unique(wet.element_dofs))

    def potential(weight, potentials):
        level = every.zeros()
        for name, value in potentials.items():
            level[every.get_dofs(name).all()] = value
        held = np.concatenate([outside, *(every.get_dofs(name).all() for name in potentials)])
        return solve(*condense(weighted.assemble(wet, weight=weight), x=level, D=held))

    def step(rise, scale):
        weight = 1.0 + C * np.asarray(wet.interpolate(rise))
        heat = every.zeros()
        for potentials in section.potentials:
            phi = wet.interpolate(potential(weight, potentials))
            heat += warming.assemble(wet, weight=scale * K * weight, phi=phi)
        return solve(*condense(conducting, heat, D=np.concatenate(cold)))

    ends = mesh.p[:, mesh.t[:, liquid]].reshape(2, -1)
    x, y = (
        np.linspace(axis.min(), axis.max(), count)
        for axis, count in zip(ends, (21, 301), strict=True)
    )
    probes = every.probes(np.stack([each.ravel() for each in np.meshgrid(x, y)]))

    def hottest(rise):
        return (probes @ rise).max()

    unit = step(every.zeros(), 1.0)

    def highest(first):
        rise = every.zeros()
        for _ in range(200):
            before, rise = rise, step(rise, first / hottest(unit))
            if np.abs(rise - before).max() < 1e-9 * hottest(rise):
                return hottest(rise)
        raise AssertionError("no steady state found")

    return highest


GLASS = Wall(material="glass", thickness=100 * UM, outside="held")
PDMS = Wall(material="pdms", thickness=60 * UM, outside="still-air")
SILICON = Wall(material="silicon", thickness=20 * UM, outside="held")
WALLED = {
    "coplanar": chip(floor=GLASS, lid=PDMS),
    "plate": chip(BarsUnderPlate, floor=SILICON, lid=SILICON),
    "four phases": chip(FourPhaseBars, floor=SILICON, lid=SILICON),
}


@pytest.mark.parametrize("name", WALLED)
def test_second_order_and_beyond_against_a_full_solution(name):
    section = WALLED[name].section()
    _, found = within_walls(section)
    growth = float(found.growth(C, C))
    highest = full_solution(section)
    small = np.array([0.01, 0.02]) / C
    slopes = [(highest(first) / first - 1) / (C * first) for first in small]
    assert growth / C == pytest.approx(2 * slopes[0] - slopes[1], rel=2e-3)
    for first in np.array([0.1, 0.3, 0.6]) / C:
        full, ours = highest(first), float(self_consistent(first, growth))
        assert full * (1 - 1e-4) < ours  # errs to the warm side
        # between isothermal electrodes by 16 % of what is added, at cΔT₀ = 0.6
        assert ours - full < 0.16 * (full - first)


def test_a_field_that_permittivity_decides_does_not_give_way_as_much():
    """Above the charge relaxation frequency the liquid is warmer at the same first-order rise."""
    _, found = within_walls(chip(BarsUnderPlate, floor=GLASS, lid=GLASS).section())
    assert found.spread < 0
    assert found.growth(C, -0.0046) > found.growth(C, C)
