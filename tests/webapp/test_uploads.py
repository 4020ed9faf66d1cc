"""Field maps on the server: kept by digest, told when bad, and nothing else can be read."""

import os

import numpy as np
import pytest
from flask import Flask

from model.errors import DesignError
from model.files import FileError, digest_of
from model.layouts.field_map import FieldMap
from model.profile import document, load_profile, profile_text
from tests import field_maps
from tests.wishes import wished
from webapp import uploads
from webapp.app import Settings, make_app
from webapp.cli import main
from webapp.uploads import Uploads
from webapp.views import VIEWS

UM = 1e-6
HEIGHT = 100 * UM


def smooth(lowest=0.0, width=120 * UM):
    """Table of φ = ½·cos(kx)·exp(−ky), one half wave wide, for 5 V peak to peak."""
    k = np.pi / width
    x, y = places = field_maps.grid(
        np.linspace(-0.5, 0.5, 49) * width, np.linspace(lowest, HEIGHT, 41)
    )
    field = 0.5 * k * np.exp(-k * y) * np.array([np.sin(k * x), np.cos(k * x)])
    return field_maps.table(places, 2.5 * field, "5 V peak to peak")


@pytest.fixture(scope="module")
def client(tmp_path_factory):
    made = make_app(Settings(cache_folder=tmp_path_factory.mktemp("cache")))
    assert isinstance(made.server, Flask)
    made.server.config["PROPAGATE_EXCEPTIONS"] = False  # answer a failure as a server would
    return made.server.test_client()


def asked(client, design, values, view="corridor"):
    data = {"number": 1, "document": document(design), "values": values, "theme": "light"}
    found = client.post(f"/answer/{view}", json=data)
    assert found.status_code == 200
    return found.json


@pytest.fixture(scope="module")
def bare(yeast):
    """The page's design once it is turned to a field map: no file is chosen yet."""
    opened, _ = wished(yeast, "turn", "chip", "field-map")
    assert not opened.problems
    assert opened.design.chip.channel_height == yeast.chip.channel_height
    return opened.design


def test_a_layout_without_its_file_asks_for_one(client, bare):
    errors = asked(client, bare, {})["errors"]
    assert errors.keys() == {"chip.file"}
    assert errors["chip.file"].startswith("Choose a field map")


def test_an_uploaded_map_is_used(client, bare):
    values = client.post("/maps", data=smooth()).json["values"]
    assert values["chip.digest"] == digest_of(smooth())
    assert (values["chip.window_start"], values["chip.window_length"]) == ("-60 um", "120 um")
    values["chip.file"] = "of my solver.csv"
    for view in VIEWS:
        found = asked(client, bare, values, view)
        assert not found["errors"]
        assert found["figures"]
    assert any("energy of the field map" in note for note in found["notes"])
    assert asked(client, bare, {**values, "chip.file": "other name.csv"})["errors"] == {}


@pytest.mark.parametrize("view", VIEWS)
def test_what_is_not_known_is_said_in_every_view(client, bare, view):
    values = client.post("/maps", data=smooth(10 * UM)).json["values"]
    values |= {"chip.file": "upper part.csv", "task.working_height": "20 um"}
    found = asked(client, bare, values, view)
    assert not found["errors"]
    assert any("not known for this chip" in note for note in found["notes"])
    if view != "polarisation":  # which shows neither heat nor flow
        assert any("not known for this chip" in words for words in found["sentences"].values())
    for words in (str(found["sentences"]), str(found.get("ledger", "")), str(found.get("probe"))):
        assert "nan" not in words.lower()
    errors = asked(client, bare, {**values, "task.working_height": "9 um"}, view)["errors"]
    assert errors.keys() == {"task.working_height"}


def test_a_window_that_does_not_repeat_can_be_probed_anywhere(client, bare):
    values = client.post("/maps", data=smooth()).json["values"]
    values |= {"chip.file": "alone.csv", "chip.periodic": False}
    for x in (-1e-4, -6e-5, 0.0, 6e-5, 0.5):
        data = {"number": 1, "document": document(bare), "values": values, "theme": "light"}
        data["options"] = {"probe": {"x": x, "y": 5e-5}}
        found = client.post("/answer/section", json=data)
        assert found.status_code == 200
        inside = any(reading["label"] == "Field" for reading in found.json["probe"]["readings"])
        assert inside == (abs(x) <= 6e-5)


@pytest.mark.parametrize(
    ("content", "words"),
    [
        (b"", "is empty"),
        (b"x,y\n1,2\n", "line 1: the column “x” needs its unit"),
        (b"\x89PNG\0\0", "no text file"),
        (smooth().replace(b"# voltage", b"# nothing"), "does not say which voltage"),
    ],
)
def test_a_bad_map_is_told_and_not_kept(client, content, words):
    found = client.post("/maps", data=content)
    assert found.status_code == 200
    assert words in found.json["problem"]
    assert "values" not in found.json


def test_too_large_a_map_is_refused(client):
    assert client.post("/maps", data=b"0" * (21 * 1024 * 1024)).status_code == 413


def test_the_door_is_no_wider_for_other_requests(client):
    assert client.post("/answer/corridor", data=b"0" * (2 * 1024 * 1024)).status_code in (400, 413)


@pytest.mark.parametrize(
    "values",
    [
        {"chip.file": "rinse-water-yeast.toml"},
        {"chip.file": "../README.md"},
        {"chip.file": "/etc/hostname"},
        {"chip.file": "a.csv", "chip.digest": "0123456789abcdef"},
    ],
)
def test_no_visitor_reads_files_of_the_server(client, bare, values):
    errors = asked(client, bare, values)["errors"]
    assert errors == {"chip.file": "Is not kept here; choose the file again"}


@pytest.mark.parametrize("digest", ["", "*", "?" * 16, "../" * 4, "[a-f]*aaaa", "zzzzzzzz"])
def test_only_a_digest_finds_a_map(tmp_path, digest):
    kept = Uploads(tmp_path / "maps")
    kept.keep(b"contents")
    with pytest.raises(FileError):
        kept("contents.csv", digest)
    assert kept("any.csv", digest_of(b"contents")) == b"contents"


def test_the_maps_used_least_lately_make_room(tmp_path, monkeypatch):
    monkeypatch.setattr(uploads, "MOST_KEPT", 25)
    kept = Uploads(tmp_path)
    names = [f"{number:010}".encode() for number in range(3)]
    for age, content in enumerate(names[:2]):
        kept.keep(content)
        path = next(path for path in tmp_path.glob("*.csv") if path.read_bytes() == content)
        os.utime(path, (1000 + age, 1000 + age))
    kept("", digest_of(names[0]))  # used again, so that the other one is the oldest
    kept.keep(names[2])
    assert kept("", digest_of(names[0])) == names[0]
    assert kept("", digest_of(names[2])) == names[2]
    with pytest.raises(FileError):
        kept("", digest_of(names[1]))


@pytest.fixture
def folder(tmp_path, yeast):
    """A profile with its map beside it."""
    chip = FieldMap(
        file="map.csv",
        channel_height=HEIGHT,
        channel_width=1e-3,
        window_start=-60 * UM,
        window_length=120 * UM,
    )
    (tmp_path / "profile.toml").write_text(profile_text(yeast.model_copy(update={"chip": chip})))
    (tmp_path / "map.csv").write_bytes(smooth())
    return tmp_path


def test_a_served_profile_brings_its_map(folder, tmp_path_factory):
    made = make_app(Settings(profiles=folder, cache_folder=tmp_path_factory.mktemp("cache")))
    client = made.server.test_client()
    design = load_profile(folder / "profile.toml")
    assert asked(client, design, {})["errors"] == {}
    other = tmp_path_factory.mktemp("cache")
    made = make_app(Settings(first=folder / "profile.toml", cache_folder=other))
    assert asked(made.server.test_client(), design, {})["errors"] == {}


def test_a_profile_without_its_map_is_told_at_the_start(folder, tmp_path_factory):
    (folder / "map.csv").unlink()
    with pytest.raises(DesignError, match=r"chip\.file: is not in the folder"):
        make_app(Settings(profiles=folder, cache_folder=tmp_path_factory.mktemp("cache")))


def test_the_command_line_takes_the_map_beside_the_profile(folder, capsys):
    assert main(["check", str(folder / "profile.toml")]) in (0, 1)
    assert "field map" in capsys.readouterr().out
    (folder / "map.csv").write_text("x (um)\n1\n")
    assert main(["check", str(folder / "profile.toml")]) == 2
    told = capsys.readouterr().err
    assert "chip.file: line 1: the column y is missing" in told
    assert "Traceback" not in told
