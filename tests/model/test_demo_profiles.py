"""Every demo loads, runs, is invented, and says where its numbers are from."""

import tomllib
from pathlib import Path

import pytest

from model.profile import SCHEMA, load_profile, read_document
from model.summary import check_object

PROFILES = sorted((Path(__file__).resolve().parents[2] / "demo_profiles").glob("*.toml"))


@pytest.fixture(params=PROFILES, ids=lambda path: path.stem)
def path(request):
    return request.param


def test_there_are_several():
    assert len(PROFILES) >= 4


def test_a_demo_says_that_it_is_invented_and_names_its_sources(path):
    first, *lines = path.read_text(encoding="utf-8").splitlines()
    assert first.startswith("# Invented")
    comments = " ".join(line.partition("#")[2] for line in lines)
    assert any(str(year) in comments for year in range(1950, 2027))


def test_a_demo_is_a_whole_profile(path):
    data = tomllib.loads(path.read_text(encoding="utf-8"))
    assert data["schema"] == SCHEMA
    assert data == read_document(path.read_bytes())
    design = load_profile(path)
    assert design.title
    assert design.question.endswith("?")
    assert {"task", "chip", "liquid", "drive", "flow", "particle", "limits"} <= data.keys()


def test_a_demo_runs(path, results):
    data = check_object(results[path.stem])
    assert data["limits"]
    assert data["floor_Vpp"] > 0.0
    assert data["ceiling_Vpp"] > 0.0


def test_demos_differ(results):
    verdicts = {result.inside for result in results.values()}
    assert verdicts == {True, False}
    assert len({result.binding.rule.id for result in results.values()}) >= 3
    titles = [result.design.title for result in results.values()]
    assert len(set(titles)) == len(titles)
