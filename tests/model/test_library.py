"""The library of published particles: form, sources, spreads, and a file of one's own beside it."""

import re
from pathlib import Path

import numpy as np
import pytest

from model.crossovers import HIGHEST_FREQUENCY, LOWEST_FREQUENCY
from model.errors import DesignError
from model.library import load_library
from model.liquid.liquid import Liquid
from model.profile import document, parse_design

LIBRARY = load_library()
README = Path(__file__).resolve().parents[2] / "README.md"


@pytest.fixture(params=LIBRARY.values(), ids=LIBRARY)
def entry(request):
    return request.param


def test_groups():
    groups = [entry.group for entry in LIBRARY.values()]
    wanted = {"blood": 8, "tumour": 8, "tissue": 2, "yeast": 2, "bacteria": 2, "beads": 3}
    assert {group: count for group, count in wanted.items() if groups.count(group) < count} == {}
    assert {"vesicles", "spores"} <= set(groups)
    assert len(LIBRARY) >= 28


def test_an_entry_tells_its_source(entry):
    assert LIBRARY[entry.id] is entry
    assert re.search(r"\b(19|20)\d\d\b", entry.source)  # year
    assert re.search(r"\d+:\d+", entry.source)  # volume and page
    assert entry.title
    assert entry.method


def test_no_two_read_the_same():
    titles = [(entry.title, entry.source) for entry in LIBRARY.values()]
    assert len(set(titles)) == len(titles)


def test_every_number_has_a_row(entry):
    rows = entry.rows()
    assert len(rows) == len(entry.values)
    for row in rows:
        assert row.status in {"read", "memory", "assumed"}
        assert row.label[0].isupper()
        assert any(character.isdigit() for character in row.value)
        assert row.basis or row.status != "assumed"
    assert len({row.label for row in rows}) == len(rows)


def test_a_particle_goes_into_a_profile(entry, yeast):
    table = entry.particle_document()
    assert not {"role", "must_live"} & table.keys()
    data = document(yeast)
    data["particle"] = [{**table, "role": "watch"}, {**data["particle"][0], "name": "other"}]
    found, _ = parse_design(data).particles
    assert found == entry.particle.model_copy(update={"role": "watch"})


def test_a_particle_polarises_at_every_frequency(entry):
    frequency = np.geomspace(LOWEST_FREQUENCY, HIGHEST_FREQUENCY, 201)
    conductivity = np.array([[1e-4], [1e-2], [1.0]])
    medium = Liquid(conductivity=0.01).medium(2 * np.pi * frequency, conductivity)
    factor = entry.particle.polarisation(medium)
    assert factor.shape == (3, 201)
    assert np.isfinite(factor).all()
    if entry.particle.kind != "ellipsoid":
        assert np.all((factor.real > -0.5 - 1e-9) & (factor.real < 1.0))


def test_spreads_become_variations():
    cell = LIBRARY["t-lymphocyte-yang-1999"].particle
    assert cell.membrane_cv == pytest.approx(3.1 / 10.5, rel=2e-3)
    assert cell.radius_cv == 0.0
    # what is told as an uncertainty is shown and varies nothing
    other = LIBRARY["hl-60-wang-2002"]
    assert other.particle.membrane_cv == 0.0
    spread = {row.label: row.spread for row in other.rows()}["Membrane capacitance"]
    assert "0.9 mF/m²" in spread
    assert "among" not in spread


def test_nothing_can_be_changed():
    entry = next(iter(LIBRARY.values()))
    with pytest.raises(TypeError):
        entry.values["radius"] = None
    with pytest.raises(ValueError, match="frozen"):
        entry.title = "other"
    with pytest.raises(AttributeError):
        entry.rows()[0].value = "1"


def test_demos_agree_with_the_library(demos):
    twins = {
        ("rinse-water-yeast", "viable yeast"): "yeast-viable-huang-1992",
        ("rinse-water-yeast", "dead yeast"): "yeast-dead-huang-1992",
        ("tumour-cells-sugar-buffer", "breast tumour cell"): "mda-mb-231-becker-1995",
        ("tumour-cells-sugar-buffer", "T lymphocyte"): "t-lymphocyte-yang-1999",
        ("tumour-cells-sugar-buffer", "monocyte"): "monocyte-yang-1999",
        ("tap-water-bacteria", "Escherichia coli"): "e-coli-suehiro-2003",
        ("tap-water-bacteria", "counting bead, 1 µm"): "latex-1um",
        ("latex-bead-rinse", "assay bead, 12 µm"): "latex-12um",
        ("latex-bead-rinse", "loose latex, 1 µm"): "latex-1um",
        ("beads-at-an-opening", "bead, 6 µm"): "latex-6um",
        ("beads-at-an-opening", "bead, 1 µm"): "latex-1um",
    }
    own = {"name", "role", "must_live", "source", "radius_cv", "membrane_cv"}
    for (demo, name), entry in twins.items():
        (used,) = (one for one in demos[demo].particles if one.name == name)
        listed = LIBRARY[entry].particle
        same = used.kind == listed.kind  # a rod may stand as a sphere in a demo
        keys = type(listed).model_fields.keys() - own if same else {"density", "core", "layers"}
        for key in keys:
            assert getattr(used, key) == getattr(listed, key), (demo, name, key)


ONE = """
[[entry]]
id = "{id}"
title = "Bead"
group = "own"
source = "Laboratory book 1"
method = "crossover"
{more}
[entry.particle]
name = "bead"
kind = "solid-sphere"
radius = "{radius}"
density = "1050 kg/m^3"
relative_permittivity = 2.55
conductivity = "0 S/m"
{field}
[entry.values]
radius = {{ status = "read"{radius_row} }}
density = {{ status = "read" }}
relative_permittivity = {{ status = "read" }}
conductivity = {{ status = "read" }}
{rows}
"""
SURFACE = 'surface_conductance = { status = "read" }'


def text(id="bead", radius="1 um", more="", field="", radius_row="", rows=SURFACE):
    return ONE.format(
        id=id, radius=radius, more=more, field=field, radius_row=radius_row, rows=rows
    )


@pytest.fixture
def load(tmp_path):
    def from_text(content):
        path = tmp_path / "mine.toml"
        path.write_text(content, encoding="utf-8")
        return load_library(path)

    return from_text


def test_a_file_of_ones_own_stands_behind_the_published(load):
    found = load(text() + text(id="bead-2", radius_row=', spread = "0.05 um"'))
    assert list(found) == [*LIBRARY, "bead", "bead-2"]
    assert found["bead"].particle.radius == pytest.approx(1e-6)
    assert found["bead-2"].particle.radius_cv == pytest.approx(0.05)


def test_the_example_of_the_readme_loads(load):
    blocks = re.findall(r"```toml\n(\[\[entry\]\].*?)```", README.read_text("utf-8"), re.DOTALL)
    (example,) = blocks
    (entry,) = list(load(example).values())[len(LIBRARY) :]
    assert entry.particle.radius_cv == pytest.approx(0.5 / 5.6, rel=5e-3)
    assert entry.particle.membrane_cv == pytest.approx(2 / 12, rel=5e-3)


@pytest.mark.parametrize(
    ("content", "path", "word"),
    [
        (text(rows=""), "entry.0.values.surface_conductance", "missing"),
        (text(rows=SURFACE + '\n"core.conductivity" = { status = "read" }'),
         "entry.0.values.core.conductivity", "no number"),
        (text(rows='surface_conductance = { status = "assumed" }'),
         "entry.0.values.surface_conductance.basis", "rests on"),
        (text(rows='surface_conductance = { status = "guessed" }'),
         "entry.0.values.surface_conductance.status", "one of"),
        (text(radius_row=', spread = "1 V"'), "entry.0.values.radius.spread", "another kind"),
        (text(radius_row=', spread = "0 um"'), "entry.0.values.radius.spread", "more than zero"),
        (text(radius_row=', spread = "1 nm", uncertainty = "1 nm"'),
         "entry.0.values.radius.uncertainty", "beside a spread"),
        (text(radius_row=', spread = "0.9 um"'), "entry.0.particle.radius_cv", "from 0 to 0.5"),
        (text(radius_row=', spread = "0.1 um"', field="radius_cv = 0.1",
              rows=SURFACE + '\nradius_cv = { status = "read" }'),
         "entry.0.particle.radius_cv", "only one"),
        (text(field="radius_cv = 0.1"), "entry.0.values.radius_cv", "missing"),
        (text(radius="1 V"), "entry.0.particle.radius", "another kind"),
        (text(field='rolle = "collect"'), "entry.0.particle.rolle", "role"),
        (text(more='methode = "x"'), "entry.0.methode", "method"),
        (text(id="Bead 1"), "entry.0.id", "lower-case"),
        (text() + text(), "entry.1.id", "two entries"),
        (text(id="yeast-viable-huang-1992"), "entry.0.id", "taken"),
        (text().replace('title = "Bead"', ""), "entry.0.title", "missing"),
        (text().replace("[entry.particle]", "[entry.bead]"), "entry.0.particle", "missing"),
        ("", "entry", "missing"),
        ("entry = []", "entry", "at least one"),
        ("entry = 3", "entry", "list"),
        ("entry", "", "no TOML"),
        ("a = " + "[" * 30 + "]" * 30, "", "nested"),
    ],
)  # fmt: skip
def test_faults_are_told_with_their_place(load, content, path, word):
    with pytest.raises(DesignError) as caught:
        load(content)
    told = {error.path: error.problem for error in caught.value.errors}
    assert path in told
    assert word in told[path]
    assert any("mine.toml" in note for note in caught.value.__notes__)


def test_every_fault_is_told_at_once(load):
    with pytest.raises(DesignError) as caught:
        load(text(radius="1 V") + text(id="b", rows="") + text(id="c", more='what = "x"'))
    assert {error.path.split(".")[1] for error in caught.value.errors} == {"0", "1", "2"}


def test_a_file_that_is_not_there_is_told(tmp_path):
    with pytest.raises(DesignError, match="cannot be opened"):
        load_library(tmp_path / "none.toml")
