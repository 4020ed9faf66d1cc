"""The inputs: every field has its control, with words that help."""

import pytest

from model.declare import Choice, Flag, declarations
from model.design import Design
from webapp.controls import (
    ELSEWHERE,
    all_fields,
    control,
    control_id,
    help_text,
    inputs_panel,
    summaries,
)


def tree_of(component):
    """A component with everything in it, in plain data."""
    return component.to_plotly_json() if hasattr(component, "to_plotly_json") else component


def ids_in(component):
    """Every id within components or plain lists of them."""
    if isinstance(component, list | tuple):
        for item in component:
            yield from ids_in(item)
        return
    plain = tree_of(component)
    if isinstance(plain, dict) and "props" in plain:
        if "id" in plain["props"]:
            yield str(plain["props"]["id"])
        for value in plain["props"].values():
            yield from ids_in(value)


def declared_paths(part, path=""):
    """Every declared path of a design, found without the code of the controls."""
    for key, _ in declarations(type(part)):
        yield f"{path}{key}"
    for name, info in type(part).model_fields.items():
        value, key = getattr(part, name), info.alias or name
        items = value if isinstance(value, tuple) else [value]
        for index, item in enumerate(items):
            if hasattr(type(item), "model_fields"):
                inner = f"{path}{key}.{index}." if isinstance(value, tuple) else f"{path}{key}."
                yield from declared_paths(item, inner)


def test_every_declared_field_has_one_control(demos):
    for design in demos.values():
        found = list(ids_in(inputs_panel(design)))
        assert len(found) == len(set(found))
        shown = {path for path in declared_paths(design) if path not in ELSEWHERE}
        for path in shown:
            flagged = str(control_id(path, flag=True)) in found
            assert flagged or str(control_id(path)) in found, path
        controls = [name for name in found if name.startswith("{") and "turn" not in name]
        assert len(controls) == len(shown)


def test_controls_show_what_a_person_would_type(yeast):
    shown = {field.path: field.text for field in all_fields(yeast)}
    assert shown["chip.bar_width"] == "60 µm"
    assert shown["chip.bar_count"] == "60"
    assert shown["liquid.temperature"] == "22 °C"
    assert shown["particle.0.layers.0.thickness"] == "8 nm"
    assert shown["particle.0.must_live"] is True
    assert shown["liquid.viscosity"] == ""
    assert shown["task.dielectrophoresis"] == "positive"


def test_a_control_tells_label_help_and_range(yeast):
    keys = {}
    for field in all_fields(yeast):
        part, _, key = field.path.rpartition(".")
        keys.setdefault(part, set()).add(key)
    for field in all_fields(yeast):
        plain = tree_of(control(field))["props"]
        if field.declared.only_with is not None:  # wrapped, so that it can be hidden
            part, _, key = plain["data-only"].rpartition(".")
            assert key in keys[part]
            assert part == field.path.rpartition(".")[0]
            plain = tree_of(plain["children"])["props"]
        assert plain["label"] == field.declared.label
        assert plain["description"].startswith(field.declared.help)
        if isinstance(field.declared, Choice):
            assert plain["value"] in {option["value"] for option in plain["data"]}
        elif isinstance(field.declared, Flag):
            assert isinstance(plain["checked"], bool)
        else:
            assert isinstance(plain["value"], str)


def test_help_names_range_and_source(yeast):
    words = {field.path: help_text(field.declared) for field in all_fields(yeast)}
    assert "Allowed: from 0.5 to 2000 µm." in words["chip.gap"]
    assert "Source:" in words["limits.temperature_rise"]
    assert "Allowed" not in words["particle.0.name"]


def test_summaries_follow_the_design(yeast, vary):
    assert summaries(yeast)["limits"] == "1 changed"  # yeast is kept below 30 °C
    assert summaries(vary(yeast, {"limits.highest_temperature": "37 degC"}))["limits"] == "defaults"
    assert summaries(yeast)["particles"] == "2"
    assert summaries(yeast)["flow"] == "3 µL/min"


def test_the_strip_holds_what_the_panel_leaves_out():
    assert set(ELSEWHERE) == {"drive.frequency", "drive.voltage", "liquid.conductivity", "title"}
    assert {key for key, _ in declarations(Design)} >= {"title", "question"}


@pytest.mark.parametrize("path", ["chip.gap", "particle.0.layers.1.name"])
def test_ids_have_no_dots(path):
    assert "." not in next(iter(control_id(path).values()))
