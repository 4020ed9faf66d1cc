"""The application behind its door: headers, refusals, and nothing that leaves this machine."""

import json
import logging
import re
from pathlib import Path

import numpy as np
import pytest
from flask import Flask
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from model.errors import DesignError
from model.profile import document, profile_text
from model.summary import spectrum_rows
from webapp.app import MAX_REQUEST, Settings, make_app
from webapp.services import load_profiles

CALLBACK = "/_dash-update-component"


@pytest.fixture(scope="module")
def app(tmp_path_factory, solved):
    made = make_app(Settings(cache_folder=tmp_path_factory.mktemp("cache"), solver=solved))
    assert isinstance(made.server, Flask)
    return made


@pytest.fixture(scope="module")
def client(app):
    app.server.config["PROPAGATE_EXCEPTIONS"] = False  # answer a failure as a server would
    return app.server.test_client()


@pytest.fixture
def good(yeast):
    return {"number": 1, "document": document(yeast), "values": {}, "theme": "light"}


def post(client, body, path="/answer/corridor"):
    return client.post(path, data=body, content_type="application/json")


def test_a_good_request_is_answered(client, good):
    found = client.post("/answer/corridor", json=good)
    assert found.status_code == 200
    assert found.json["number"] == 1
    assert found.json["figures"]


def test_wrong_entries_are_an_answer(client, good):
    found = client.post("/answer/corridor", json={**good, "values": {"drive.voltage": "x"}})
    assert found.status_code == 200
    assert found.json["errors"].keys() == {"drive.voltage"}


def test_spectra_are_those_of_the_command_line(client, good, yeast):
    frequency = np.geomspace(1e3, 1e8, 400)
    found = client.post("/spectra", json=good).json["csv"]
    assert found.splitlines() == list(spectrum_rows(yeast, frequency))
    wrong = client.post("/spectra", json={**good, "values": {"drive.voltage": "x"}})
    assert wrong.json["errors"].keys() == {"drive.voltage"}


HEADERS = ("Content-Security-Policy", "X-Content-Type-Options", "Referrer-Policy")


@pytest.mark.parametrize(
    ("path", "status"),
    [("/", 200), ("/health", 200), ("/library", 200), ("/_dash-layout", 200),
     ("/_dash-dependencies", 200), ("/assets/page.js", 200), ("/assets/none.js", 404),
     ("/answer/corridor", 405), ("/spectra", 405)],
)  # fmt: skip
def test_every_answer_carries_the_security_headers(client, path, status):
    with client.get(path) as found:
        assert found.status_code == status
        for header in HEADERS:
            assert found.headers[header]
    policy = found.headers["Content-Security-Policy"]
    assert "default-src 'self'" in policy
    assert "unsafe-eval" not in policy
    assert "http:" not in policy
    assert "https:" not in policy


def test_refusals_carry_the_security_headers_too(client, good):
    for found in (post(client, "x"), post(client, b" " * (MAX_REQUEST + 1))):
        assert found.status_code in (400, 413)
        for header in HEADERS:
            assert found.headers[header]


def test_health(client):
    assert client.get("/health").json == {"status": "up"}


@pytest.mark.parametrize("path", ["/answer/other", "/answer/", "/answer/corridor/x"])
def test_no_such_view(client, good, path):
    assert client.post(path, json=good).status_code in (400, 404, 405)


@pytest.mark.parametrize("method", ["get", "put", "delete", "patch"])
def test_a_wrong_method(client, method):
    assert getattr(client, method)("/answer/corridor").status_code == 405


BODIES = {
    "empty": b"",
    "no JSON": b"{",
    "binary": bytes(range(256)),
    "a number": b"3",
    "null": b"null",
    "a list": b"[1, 2]",
    "a nest": b"[" * 200_000,
    "a nest of tables": b'{"a":' * 100_000,
    "endless digits": b'{"number": ' + b"9" * 5000 + b"}",
    "not a number": b'{"number": NaN, "document": {}, "values": {}, "theme": "light"}',
}


@pytest.mark.parametrize("name", BODIES)
@pytest.mark.parametrize("path", ["/answer/corridor", "/spectra", CALLBACK])
def test_bodies_that_no_page_sends(client, name, path):
    found = post(client, BODIES[name], path)
    assert found.status_code == 400


@pytest.mark.parametrize("path", ["/answer/corridor", CALLBACK])
def test_a_body_that_is_too_large(client, path):
    assert post(client, b" " * (MAX_REQUEST + 1), path).status_code == 413


def test_a_body_without_its_type(client, good):
    found = client.post("/answer/corridor", data=json.dumps(good), content_type="text/plain")
    assert found.status_code == 400


PLAIN = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=6),
    lambda inner: (
        st.lists(inner, max_size=3)
        | st.dictionaries(st.sampled_from(["gap", "kind", "layout", "x", "\ud800"]), inner)
    ),
    max_leaves=8,
)
FUZZ = settings(
    max_examples=80,
    deadline=None,
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.function_scoped_fixture],
)


@FUZZ
@given(
    key=st.sampled_from(["number", "document", "values", "theme", "other"]),
    value=PLAIN,
)
def test_strange_requests_are_never_a_failure(client, good, key, value):
    found = post(client, json.dumps({**good, key: value}))
    assert found.status_code in (200, 400)
    json.loads(found.data)


@FUZZ
@given(
    place=st.sampled_from(["title", "task", "chip", "liquid", "drive", "flow", "particle",
                           "limits", "schema"]),
    value=PLAIN,
)  # fmt: skip
def test_strange_documents_are_never_a_failure(client, good, place, value):
    good["document"][place] = value
    found = post(client, json.dumps(good))
    assert found.status_code in (200, 400)
    json.loads(found.data)


def callbacks_of(client):
    return [
        found
        for found in client.get("/_dash-dependencies").json
        if not found["clientside_function"]
    ]


def call_of(callback, values, changed=None):
    output = callback["output"]
    names = output.strip(".").split("...")
    places = [name.rpartition(".") for name in names]
    outputs = [
        {"id": json.loads(place) if place.startswith("{") else place, "property": key}
        for place, _, key in places
    ]
    return {
        "output": output,
        "outputs": outputs if output.startswith("..") else outputs[0],
        "inputs": [
            {**place, "value": value}
            for place, value in zip(callback["inputs"], values, strict=True)
        ],
        "state": [{**place, "value": None} for place in callback["state"]],
        "changedPropIds": changed or [],
    }


def test_the_page_can_call_its_callbacks(client, good):
    opening, saving = (callback for callback in callbacks_of(client))
    found = client.post(CALLBACK, json=call_of(opening, [{"link": ""}, None, None, None],
                                               ["address.data"]))  # fmt: skip
    assert found.status_code == 200
    assert found.json["response"]["document"]["data"]["problems"] == []
    found = client.post(CALLBACK, json=call_of(saving, [good], ["save-request.data"]))
    assert found.status_code == 200
    assert "[[particle]]" in found.json["response"]["download"]["data"]["content"]


def test_another_layout_keeps_what_both_have(client, good):
    opening, _ = callbacks_of(client)

    def ask(layout):
        wish = {"do": "turn", "at": "chip", "word": layout}
        values = [None, None, None, {**good, "wish": wish}]
        return client.post(CALLBACK, json=call_of(opening, values, ["edit-request.data"]))

    document = ask("facing-bars").json["response"]["document"]["data"]
    before, after = good["document"]["chip"], document["profile"]["chip"]
    assert document["problems"] == []
    assert after == {**before, "layout": "facing-bars", "offset": "0 um"}
    for layout in ("no-such-layout", None, 3, ["facing-bars"]):
        assert ask(layout).status_code == 400


STRANGE = [None, 3, "x", [1], {"a": 1}, True, "data:,%%%", {"link": "1.a.é"}, {"link": [3]},
           "#" * 50_000, {"link": "x" * 50_000}]  # fmt: skip


@pytest.mark.parametrize("value", STRANGE, ids=lambda value: repr(value)[:16])
def test_strange_values_of_callbacks_are_never_a_failure(client, value):
    for callback in callbacks_of(client):
        inputs = callback["inputs"]
        for place in inputs:
            changed = [f"{place['id']}.{place['property']}"]
            body = call_of(callback, [value] * len(inputs), changed)
            assert client.post(CALLBACK, json=body).status_code in (200, 204, 400)


@pytest.mark.parametrize(
    "change",
    [
        {"output": "nothing.here"},
        {"output": None},
        {"output": ["x"]},
        {"inputs": []},
        {"inputs": None},
        {"inputs": [1, 2, 3]},
        {"inputs": [[], [], []]},
        {"inputs": [{}, {}, {}]},
        {"outputs": None},
        {"outputs": 3},
        {"outputs": []},
        {"outputs": {"id": 3, "property": "data"}},
        {"outputs": [{"id": "x", "property": "value"}] * 6},
        {"changedPropIds": 3},
        {"changedPropIds": [None]},
        {"state": [1]},
    ],
)
def test_calls_that_no_page_makes_are_refused(client, change):
    for callback in callbacks_of(client):
        body = {**call_of(callback, [None] * len(callback["inputs"])), **change}
        assert client.post(CALLBACK, json=body).status_code == 400


def test_a_fault_of_the_program_stays_one_and_tells_nothing(tmp_path, good, caplog):
    """Only bad input is refused politely; a fault is logged here and not shown there."""

    def fail(design):
        raise RuntimeError("the secret of the solver")

    app = make_app(Settings(cache_folder=tmp_path, solver=fail))
    app.server.config["PROPAGATE_EXCEPTIONS"] = False
    with caplog.at_level(logging.ERROR):
        found = app.server.test_client().post("/answer/corridor", json=good)
    assert found.status_code == 500
    assert b"secret" not in found.data
    assert "secret" in caplog.text
    for header in HEADERS:
        assert found.headers[header]


ASSETS = Path(__file__).resolve().parents[2] / "webapp" / "assets"
OUTSIDE = re.compile(r"(?:https?:)?//[A-Za-z0-9.-]+\.[a-z]{2,}")


def outside_hosts(text):
    return [host for host in OUTSIDE.findall(text) if "www.w3.org" not in host]


def test_the_page_asks_no_outside_host(client):
    for path in ("/", "/_dash-layout", "/_dash-dependencies"):
        assert outside_hosts(client.get(path).get_data(as_text=True)) == [], path
    for path in ASSETS.iterdir():
        if path.suffix in (".js", ".css") and not path.name.startswith("plotly"):
            assert outside_hosts(path.read_text(encoding="utf-8")) == [], path.name


def test_no_figure_is_offered_to_an_outside_service():
    config = (ASSETS / "draw.js").read_text(encoding="utf-8")
    assert "showSendToCloud: false" in config
    for path in ASSETS.glob("*.js"):
        if not path.name.startswith("plotly"):
            assert "showSendToCloud: true" not in path.read_text(encoding="utf-8")


def ids_in(plain):
    if isinstance(plain, dict):
        if isinstance(plain.get("props"), dict) and "id" in plain["props"]:
            yield json.dumps(plain["props"]["id"], sort_keys=True)
        for value in plain.values():
            yield from ids_in(value)
    elif isinstance(plain, list):
        for value in plain:
            yield from ids_in(value)


def test_ids_of_the_layout_are_unique(client):
    found = list(ids_in(client.get("/_dash-layout").json))
    assert found
    assert len(found) == len(set(found))
    assert {'"view"', '"document"', '"figure-corridor"'} <= set(found)


def test_an_opened_design_adds_no_id_twice(client):
    page = list(ids_in(client.get("/_dash-layout").json))
    opening = callbacks_of(client)[0]
    body = call_of(opening, [{"link": ""}, None, None, None], ["address.data"])
    panel = list(ids_in(client.post(CALLBACK, json=body).json["response"]["inputs"]["children"]))
    assert panel
    assert len(page + panel) == len({*page, *panel})


def test_answers_are_compressed(client, good):
    found = client.post("/answer/corridor", json=good, headers={"Accept-Encoding": "gzip"})
    assert found.headers["Content-Encoding"] == "gzip"


def write(folder, name, design):
    path = folder / f"{name}.toml"
    path.write_text(profile_text(design), encoding="utf-8")
    return path


def test_profiles_of_a_folder(tmp_path, demos):
    yeast, beads = demos["rinse-water-yeast"], demos["latex-bead-rinse"]
    write(tmp_path, "b", yeast)
    write(tmp_path, "a", beads)
    assert list(load_profiles(tmp_path)) == ["a", "b"]
    assert list(load_profiles(tmp_path, tmp_path / "b.toml")) == ["b", "a"]


def test_the_first_profile_stays_first_beside_one_of_its_name(tmp_path, demos):
    yeast, beads = demos["rinse-water-yeast"], demos["latex-bead-rinse"]
    folder, elsewhere = tmp_path / "folder", tmp_path / "elsewhere"
    folder.mkdir()
    elsewhere.mkdir()
    write(folder, "mine", yeast)
    mine = write(elsewhere, "mine", beads)
    found = load_profiles(folder, mine)
    assert list(found) == ["mine"]
    assert found["mine"] == beads


def test_a_bad_folder_is_told(tmp_path):
    with pytest.raises(FileNotFoundError, match="no profile"):
        load_profiles(tmp_path)
    (tmp_path / "bad.toml").write_text("schema = 2")
    with pytest.raises(DesignError) as caught:
        load_profiles(tmp_path)
    assert "bad.toml" in caught.value.__notes__[0]
