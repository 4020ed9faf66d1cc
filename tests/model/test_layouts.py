"""What every electrode layout must keep, and that broken ones are found out."""

import pickle
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pydantic import ValidationError
from skfem.quadrature import get_quadrature

from model.declare import Quantity, declarations
from model.errors import DesignError
from model.evaluate import evaluate
from model.fields.solve import solve_chip
from model.layout import Layout
from model.layouts import LAYOUTS
from model.layouts.bars_under_plate import BarsUnderPlate
from model.layouts.coplanar_bars import CoplanarBars
from model.layouts.facing_bars import FacingBars
from model.profile import document, parse_design
from model.walls import Wall
from tests import field_maps
from tests.model import plan_checks

UM = 1e-6
LENGTHS = ("um", "mm")
BARS = {
    "bar_width": 30 * UM,
    "gap": 50 * UM,
    "bar_count": 20,
    "channel_height": 25 * UM,
    "channel_width": 2e-3,
    "floor": Wall(material="glass", thickness=50 * UM, outside="held"),
    "lid": Wall(material="pdms", thickness=300 * UM, outside="still-air"),
}
#: Keyword arguments that make one or more chips of each layout.
EXAMPLES = {
    "bars-under-plate": (BARS,),
    "coplanar-bars": (BARS,),
    "facing-bars": (BARS, BARS | {"offset": 17 * UM}),
    "four-phase-bars": (BARS | {"phases": "three", "wave": "with-flow"}, BARS),
    "field-map": (
        {
            "file": "1",
            "window_start": -10 * UM,
            "window_length": 80 * UM,
            "narrowest_gap": 40 * UM,
            **{key: BARS[key] for key in ("channel_height", "channel_width", "floor", "lid")},
        },
    ),
} | plan_checks.EXAMPLES
NAMED = [
    pytest.param(LAYOUTS[name], arguments, id=f"{name} {index}")
    for name, examples in EXAMPLES.items()
    if name in LAYOUTS
    for index, arguments in enumerate(examples)
]


@dataclass(frozen=True)
class Case:
    """A chip to be checked; solved when first asked for."""

    kind: type[Layout]
    arguments: dict

    @cached_property
    def chip(self):
        """Chip of the arguments."""
        return self.kind(**self.arguments)

    @cached_property
    def section(self):
        """Its piece."""
        return self.chip.section_from(field_maps.standing)

    @cached_property
    def patterns(self):
        """Its solution."""
        return solved(self.chip)

    def all_patterns(self, x, y):
        """Its patterns at places."""
        return all_patterns(self.patterns, x, y)

    @cached_property
    def held(self):
        """Solution with both walls held at the stage outside."""
        return solved(self.kind(**self.scaled(1.0)))

    def scaled(self, factor):
        """Arguments with every length times `factor`, both walls held at the stage outside."""
        changed = dict(self.arguments)
        for key, declared in declarations(self.kind):
            if isinstance(declared, Quantity) and declared.unit in LENGTHS and key in changed:
                changed[key] *= factor
        if "file" in changed:
            changed["file"] = repr(factor)
        for key in ("floor", "lid"):
            wall = changed[key]
            changed[key] = wall.model_copy(
                update={"thickness": wall.thickness * factor, "outside": "held"}
            )
        return changed


def solved(chip, refinement=0):
    """Solution of a chip, with the file of a field map at hand."""
    return solve_chip(chip, refinement=refinement, files=field_maps.standing)


KEPT = {}


@pytest.fixture
def case(request):
    """Each example, solved once."""
    key = repr(request.param)
    return KEPT.setdefault(key, Case(*request.param))


def each_example(test):
    cases = [pytest.param(tuple(item.values), id=item.id) for item in NAMED]
    return pytest.mark.parametrize("case", cases, indirect=True)(test)


def all_patterns(patterns, x, y):
    """Five arrays: Ê, ∇|Ê|², Θ, U₁, U₂, and of two components the travelling ones, S and U₃."""
    first, second = patterns.electrothermal(x, y)
    found = [
        np.array(patterns.electric_field(x, y)),
        np.array(patterns.gradient_e2(x, y)),
        np.array(patterns.temperature(x, y)),
        np.array(first),
        np.array(second),
    ]
    if len(patterns.fold.parities) == 2:
        found.append(np.array(patterns.travelling(x, y)))
        found.append(np.array(patterns.electrothermal_travelling(x, y)))
    return found


#: Power of the lengths by which each of these arrays falls as a chip grows.
POWERS = (1, 3, 0, 0, 0, 3, 0)


def places(case, count=400):
    """Places in the liquid, away from walls and electrodes, over more than two periods."""
    if case.kind.view == "plan":
        return plan_checks.places(case, count)
    rng = np.random.default_rng(1)
    span = 2.3 * case.patterns.period
    height = case.patterns.height
    return rng.uniform(-span, span, count), rng.uniform(0.1, 0.9, count) * height


def boxes(case):
    """Boxes in the liquid that cross seams: west, east, south, north."""
    if case.kind.view == "plan":
        return plan_checks.boxes(case)
    period, height = case.patterns.period, case.patterns.height
    return [
        (start * period, (start + 0.83) * period, 0.3 * height, 0.8 * height)
        for start in (-0.7, -0.21, 0.13, 0.44)
    ]


def around_a_box(case, west, east, south, north):
    """Outward flux and circulation of Ê around a box that crosses seams, over the sum of |Ê|."""
    nodes, weights = np.polynomial.legendre.leggauss(120)
    share, weights = 0.5 * (nodes + 1), 0.5 * weights
    corners = np.array([[west, south], [east, south], [east, north], [west, north], [west, south]])
    total = np.zeros(3, dtype=complex)
    for corner, step in zip(corners, np.diff(corners, axis=0), strict=False):
        field = np.array(case.patterns.electric_field(*(corner[:, None] + np.outer(step, share))))
        parts = [field[0] * step[1] - field[1] * step[0], step @ field]
        size = np.linalg.norm(field, axis=0) * np.hypot(*step)
        total += [part @ weights for part in (*parts, size)]
    return total[:2] / total[2]


def check_declarations(case):
    """Every field but the walls has a label, a help and a range."""
    declared = dict(declarations(case.kind))
    assert set(case.kind.model_fields) - set(declared) == {"layout", "floor", "lid"}
    for found in declared.values():
        assert found.label[:1].isupper()
        assert found.help.endswith(".")
        assert found.allowed()
        if isinstance(found, Quantity):
            assert found.range()[0] < found.range()[1]


def check_electrode_faces(case):
    """The faces that are said to carry electrodes are those that do; a map tells of neither."""
    mesh = case.section.mesh
    levels = {"floor": 0.0, "lid": case.section.height}
    carrying = {
        face
        for face, level in levels.items()
        for name in case.section.electrodes
        if np.all(mesh.p[1, mesh.facets[:, mesh.boundaries[name]]] == level)
    }
    told = set(case.chip.electrode_faces)
    assert carrying == (set() if case.section.imposed else told)
    heights = case.chip.contact_heights(1 * UM)
    assert len(heights) == len(told)
    assert all(0 < height < case.chip.channel_height for height in heights)


def check_current(case):
    """Current in is current out, and Ê has no curl, also across what the symmetry puts together."""
    for box in boxes(case):
        assert np.abs(around_a_box(case, *box)).max() < 1e-4


def check_symmetry(case):
    """One period on all is as before, and nothing jumps where pieces meet."""
    fold, patterns = case.section.fold, case.patterns
    x, y = places(case, 60)
    here, next_ = (all_patterns(patterns, place, y) for place in (x, x + fold.period))
    here[0] = fold.alternation * here[0]
    for one, other in zip(here, next_, strict=True):
        np.testing.assert_allclose(other, one, atol=1e-5 * np.abs(one).max())
    if fold.mirrored:
        mirrored = all_patterns(patterns, -x, y)
        np.testing.assert_allclose(mirrored[2], all_patterns(patterns, x, y)[2], rtol=1e-9)
    step = 1e-7 * fold.period
    heights = np.linspace(0.1, 0.9, 9) * patterns.height
    sizes = [np.abs(one).max() for one in here]
    for seam in np.array([-1.0, 0.0, 0.5, 1.0]) * fold.period:
        sides = (all_patterns(patterns, seam + shift, heights) for shift in (-step, step))
        for before, after, size in zip(*sides, sizes, strict=True):
            assert np.abs(after - before).max() < 2e-3 * size


def integral(mesh, function):
    """Of a pattern over a mesh."""
    places, weights = get_quadrature(mesh.refdom, 8)
    areas = np.abs(mesh.mapping().detDF(places)) * weights
    cells = np.repeat(np.arange(mesh.nelements), weights.size)
    return function.values(cells, np.tile(places, mesh.nelements))[0] @ areas.ravel()


def check_heat(case):
    """What the field heats, in the piece that is solved, leaves outward."""
    section, patterns = case.section, case.patterns
    mesh = section.mesh
    conductivity = np.full(mesh.nelements, patterns.thermal_conductivity)
    for name, value in section.wall_conductivities.items():
        conductivity[mesh.subdomains[name]] = value
    nodes, weights = np.polynomial.legendre.leggauss(6)
    leaving = section.sink(patterns.thermal_conductivity) * integral(mesh, patterns.heat)
    for name in section.outsides:
        for facet in mesh.boundaries[name]:
            cell = mesh.f2t[0, facet]
            ends = mesh.p[:, mesh.facets[:, facet]]
            middle = ends.mean(axis=1)
            half = 0.5 * (ends[:, 1] - ends[:, 0])
            normal = np.array([half[1], -half[0]])
            outward = middle - mesh.p[:, mesh.t[:, cell]].mean(axis=1)
            normal *= np.sign(normal @ outward)
            spots = middle[:, None] + half[:, None] * nodes
            found, place = patterns.heat.cells.locate(spots)
            slope = patterns.heat.slopes(np.full_like(found, cell), place)[0]
            leaving -= conductivity[cell] * (normal @ slope) @ weights
    made = patterns.thermal_conductivity * patterns.cell_factor / section.cells_per_gap
    assert leaving == pytest.approx(made, rel=1e-4)


def check_flow(case, sources_allowed=1e-2):
    """No sources, no slip on walls and electrodes, nothing through them.

    `sources_allowed` is a share of the mean size of the flow's slopes.
    """
    patterns, section = case.patterns, case.section
    liquid = section.liquid()
    centres = np.full((2, liquid.nelements), 0.37)
    slopes = patterns.flows.slopes(np.arange(liquid.nelements), centres)
    sizes = np.sqrt(np.ptp(liquid.p[0][liquid.t], axis=0) * np.ptp(liquid.p[1][liquid.t], axis=0))
    for flow in slopes.reshape(-1, 2, *slopes.shape[1:]):
        sources = (flow[0, 0] + flow[1, 1]) * sizes
        assert np.linalg.norm(sources) < sources_allowed * np.linalg.norm(flow * sizes)
    assert not {*section.mirrors} & {*section.electrodes, *section.outsides}  # no wall is a mirror
    open_ = [*section.mirrors, *(section.joined or ())]
    facets = np.setdiff1d(
        liquid.boundary_facets(), np.concatenate([liquid.boundaries[name] for name in open_])
    )
    spots = liquid.p[:, liquid.facets[:, facets]].mean(axis=1)
    fastest = np.abs(patterns.electrothermal(*places(case))).max()
    assert np.abs(patterns.electrothermal(*spots)).max() < 1e-9 * fastest


def check_net_flow(case, uneven=1e-3):
    """The same liquid passes every x, and none where mirror planes forbid it.

    `uneven` is what sections may differ by, as a share of all that moves in any of them.
    """
    patterns, section = case.patterns, case.section
    heights = np.linspace(0, patterns.height, 801)
    for which in (0, 1):
        speeds = [
            patterns.electrothermal(x, heights)[which][0]
            for x in np.array([0.06, 0.19, 0.33, 0.58, 0.84]) * patterns.period
        ]
        through = np.trapezoid(speeds, heights, axis=1)
        assert np.ptp(through) < uneven * np.trapezoid(np.abs(speeds), heights, axis=1).max()
        if section.fold.mirrored:
            assert np.abs(through).max() < uneven * np.trapezoid(np.abs(speeds), heights).max()


def check_lines(case):
    """Tabled lines are what direct evaluation gives, one period long."""
    patterns = case.patterns
    for share in (0.03, 0.3, 0.8, 0.97):
        line = patterns.line(share * patterns.height)
        assert np.all(np.diff(line.x) > 0)
        assert line.x[-1] - line.x[0] == pytest.approx(patterns.period)
        tabled = [line.field, line.gradient, line.temperature, line.flow_1, line.flow_2]
        tabled += [extra for extra in (line.travelling, line.flow_3) if extra is not None]
        direct = all_patterns(patterns, line.x, share * patterns.height)
        for one, other in zip(tabled, direct, strict=True):
            np.testing.assert_allclose(one, other, atol=2e-3 * np.abs(other).max())


def check_storage(case):
    """Chip and patterns come back from a pickle as they were."""
    patterns = case.patterns
    again = pickle.loads(pickle.dumps(patterns))
    assert again.chip == case.chip
    x, y = places(case, 20)
    for one, other in zip(all_patterns(patterns, x, y), all_patterns(again, x, y), strict=True):
        np.testing.assert_array_equal(one, other)


def check_scaling(case, factor):
    """All lengths times s, walls held: Ê by 1/s, ∇|Ê|² by 1/s³; Θ, U and C do not change."""
    one, other = case.held, solved(case.kind(**case.scaled(factor)))
    assert other.cell_factor == pytest.approx(one.cell_factor, rel=1e-6)
    assert other.peak_temperature == pytest.approx(one.peak_temperature, rel=1e-5)
    assert other.chip.narrowest == pytest.approx(factor * one.chip.narrowest)
    assert other.chip.parallel_length == pytest.approx(factor * one.chip.parallel_length)
    x, y = places(case, 60)
    expected = all_patterns(one, x, y)
    found = all_patterns(other, x * factor, y * factor)
    for power, scaled, base in zip(POWERS, found, expected, strict=False):
        np.testing.assert_allclose(scaled * factor**power, base, atol=1e-4 * np.abs(base).max())


def check_convergence(case):
    """A finer mesh changes little."""
    coarse, fine = case.patterns, solved(case.chip, refinement=1)
    assert fine.cell_factor == pytest.approx(coarse.cell_factor, rel=1e-4)
    if case.section.imposed:  # a part of a field has less energy than the whole
        assert fine.cell_factor > (1 - 1e-12) * coarse.cell_factor
    else:  # a finite-element field has too much
        assert fine.cell_factor < coarse.cell_factor
    assert fine.peak_temperature == pytest.approx(coarse.peak_temperature, rel=1e-3)
    x, y = places(case, 200)
    for one, other in zip(all_patterns(coarse, x, y), all_patterns(fine, x, y), strict=True):
        np.testing.assert_allclose(one, other, atol=5e-3 * np.abs(other).max())


OF_ALL = [check_declarations, check_current, check_heat, check_flow, check_storage]
OF_SECTIONS = [check_electrode_faces, check_symmetry, check_net_flow, check_lines]
CHECKED = [
    pytest.param(tuple(item.values), check, id=f"{item.id} {check.__name__}")
    for item in NAMED
    for check in OF_ALL + (plan_checks.OF_PLANS if item.values[0].view == "plan" else OF_SECTIONS)
]


def long_for(*names):
    """Every layout, those named among the long checks."""
    return [
        pytest.param(name, marks=pytest.mark.long) if name in names else name for name in LAYOUTS
    ]


@pytest.mark.parametrize("name", LAYOUTS)
def test_every_layout_has_an_example(name):
    assert EXAMPLES[name], f"add a chip of the layout {name} to EXAMPLES"
    assert all(LAYOUTS[name](**arguments).layout == name for arguments in EXAMPLES[name])


@pytest.mark.parametrize(("case", "check"), CHECKED, indirect=["case"])
def test_layout(case, check):
    check(case)


@pytest.mark.parametrize("name", long_for("facing-bars", "four-phase-bars", "four-pole"))
def test_a_finer_mesh_changes_little(name):
    check_convergence(Case(LAYOUTS[name], EXAMPLES[name][-1]))


@pytest.mark.parametrize("name", long_for("four-phase-bars", "four-pole"))
def test_patterns_do_not_depend_on_size(name):
    case = Case(LAYOUTS[name], EXAMPLES[name][0])

    @settings(max_examples=2, deadline=None)
    @given(st.floats(-0.7, 0.7).map(lambda power: 10.0**power))
    def scaled(factor):
        check_scaling(case, factor)

    scaled()


@each_example
def test_a_design_with_the_layout_can_be_kept_and_evaluated(case, yeast):
    task = yeast.task.model_copy(update={"working_height": 1e-5})
    design = yeast.model_copy(update={"chip": case.chip, "task": task})
    assert parse_design(document(design)).chip == case.chip
    result = evaluate(design, case.patterns)
    assert all(np.isfinite(row.allowed) and not np.isnan(row.value) for row in result.ledger)
    length = case.patterns.cell_factor * case.chip.parallel_length
    assert 1 / result.load.resistance == pytest.approx(length * design.liquid.conductivity)


@pytest.mark.parametrize("kind", [BarsUnderPlate, FacingBars])
def test_current_crosses_one_pitch_for_each_bar(kind):
    chip = kind(**BARS)
    assert chip.parallel_length == pytest.approx(20 * 2e-3)
    assert chip.narrowest == pytest.approx(25 * UM)  # less than the gap


def test_particles_meet_the_strongest_field_at_any_electrode(yeast, vary):
    """Drawn to the electrodes they may touch floor or lid; pushed away they stay where they are."""
    assert yeast.task.may_touch(yeast.particles[0])
    assert not vary(yeast, {"task.dielectrophoresis": "negative"}).task.may_touch(
        yeast.particles[0]
    )
    radius = yeast.particles[0].equivalent_radius
    flat, facing = CoplanarBars(**BARS), FacingBars(**BARS)
    assert flat.contact_heights(radius) == (radius,)
    assert facing.contact_heights(radius) == (radius, 25e-6 - radius)
    assert facing.contact_heights(1.0) == (12.5e-6, 12.5e-6)  # it does not fit


@pytest.mark.parametrize("offset", ["80 um", "81 um", "1 mm"])
def test_an_offset_stays_below_the_pitch(yeast, offset):
    data = document(yeast)
    chip = {**data["chip"], "layout": "facing-bars", "bar_width": "30 um", "gap": "50 um"}
    with pytest.raises(DesignError) as told:
        parse_design({**data, "chip": chip | {"offset": offset}})
    (error,) = told.value.errors
    assert error.path == "chip.offset"
    assert "must be below the pitch, 80 µm" in error.problem
    with pytest.raises(ValidationError):
        FacingBars(**BARS | {"offset": offset})


@pytest.mark.parametrize("offset", [0.0, 1e-13, 3e-11, 15e-6, 30e-6, 50e-6, 65e-6, 79.9999e-6])
def test_offset_bars_keep_their_width(offset):
    """Also where edges of floor and lid nearly meet, or one lies on the end of the piece."""
    chip = FacingBars(**BARS | {"offset": offset})
    section = chip.section()
    mesh = section.mesh
    assert np.diff(np.unique(mesh.p[0])).min() > 1e-12
    for name in section.electrodes:
        ends = mesh.p[0, mesh.facets[:, mesh.boundaries[name]]]
        width = np.abs(np.diff(ends, axis=0)).sum() * section.cells_per_gap
        assert width == pytest.approx(30 * UM, rel=2e-5)


@pytest.mark.parametrize("kind", [BarsUnderPlate, FacingBars])
@pytest.mark.parametrize(
    ("width", "gap", "height", "floor", "shift"),
    [
        (0.5, 0.5, 500, 20000, 0.0),
        (2000, 2000, 5, 1, 0.02),
        (0.5, 2000, 5, 1, 1e-7),
    ],
)
def test_extremes(kind, width, gap, height, floor, shift):
    more = {"offset": shift * (width + gap) * UM} if kind is FacingBars else {}
    found = solve_chip(
        kind(
            **BARS
            | {"bar_width": width * UM, "gap": gap * UM, "channel_height": height * UM}
            | {"floor": Wall(material="silicon", thickness=floor * UM, outside="held"), **more}
        )
    )
    assert 0 < found.peak_temperature < np.inf
    assert 0 < found.cell_factor < 1.01 * (width + gap) / height
    for share in (0.0, 0.02, 0.5, 0.98, 1.0):
        line = found.line(share * height * UM)
        for values in (line.field, line.gradient, line.temperature, line.flow_1, line.flow_2):
            assert np.all(np.isfinite(values))
        direct = found.temperature(line.x, share * height * UM)
        assert np.abs(direct - line.temperature).max() < 1e-3 * found.peak_temperature


class WrongSign(CoplanarBars):
    """Neighbours taken to be alike where they are opposite."""

    def section(self, refinement=0):
        """As said above."""
        section = super().section(refinement)
        return replace(section, fold=replace(section.fold, alternation=1))


class Apart(FacingBars):
    """A whole pitch that is not joined to itself."""

    def section(self, refinement=0):
        """As said above."""
        return replace(super().section(refinement), joined=None)


class FixedBar(CoplanarBars):
    """Bars of one width, whatever is asked for."""

    def section(self, refinement=0):
        """As said above."""
        return CoplanarBars(**{**dict(self), "bar_width": 30 * UM}).section(refinement)


class BareLid(BarsUnderPlate):
    """The plate forgotten."""

    electrode_faces = ("floor",)


class Slippery(CoplanarBars):
    """The bar taken for a mirror plane, along which the liquid slips."""

    def section(self, refinement=0):
        """As said above."""
        return replace(super().section(refinement), mirrors={"bar": 1})


class Unexplained(CoplanarBars):
    """A field that nothing is said about."""

    depth: float = 1.0


BROKEN = [
    (WrongSign, {}, check_current),
    (WrongSign, {}, check_symmetry),
    (Apart, {"offset": 17 * UM}, check_current),
    (Apart, {"offset": 17 * UM}, check_symmetry),
    (FixedBar, {}, lambda case: check_scaling(case, 2.0)),
    (BareLid, {}, check_electrode_faces),
    (Slippery, {}, check_flow),
    (Unexplained, {}, check_declarations),
]


@pytest.mark.parametrize(("kind", "more", "check"), BROKEN)
def test_broken_layouts_are_found_out(kind, more, check):
    with pytest.raises(AssertionError):
        check(Case(kind, BARS | more))
