"""The command line: exit codes, plain errors, and output for people and programs."""

import csv
import io
import json
import os
import subprocess
import sys

import pytest

from model.profile import fingerprint, profile_text
from model.version import VERSION
from webapp import app, cli

GOOD, OUTSIDE, BAD = 0, 1, 2


@pytest.fixture(autouse=True)
def quick(monkeypatch, solved):
    """Chips that the session has solved are not solved again."""
    monkeypatch.setattr(cli, "solve", lambda design, files: solved(design))


@pytest.fixture
def write(tmp_path):
    def make(design):
        path = tmp_path / "profile.toml"
        path.write_text(profile_text(design), encoding="utf-8")
        return str(path)

    return make


def run(capsys, *arguments):
    code = cli.main(arguments)
    output = capsys.readouterr()
    return code, output.out, output.err


def test_inside_and_outside(capsys, write, yeast, vary):
    code, out, err = run(capsys, "check", write(yeast))
    assert (code, err) == (GOOD, "")
    assert "Inside the corridor" in out
    code, out, err = run(capsys, "check", write(vary(yeast, {"drive.voltage": "5 V"})))
    assert (code, err) == (OUTSIDE, "")
    assert "Below the corridor" in out


def test_json_is_one_object(capsys, write, yeast):
    code, out, _ = run(capsys, "check", write(yeast), "--json")
    assert code == GOOD
    data = json.loads(out)
    assert data["fingerprint"] == fingerprint(yeast)
    assert data["version"] == VERSION
    assert data["inside"] is True


def test_every_error_goes_to_the_error_stream(capsys, tmp_path, yeast):
    text = profile_text(yeast)
    text = text.replace('gap = "60 um"', 'gap = "0 um"')
    text = text.replace('frequency = "1000 kHz"', 'frequency = "0 kHz"\nwaveform = "square"')
    text = text.replace('radius = "3.26 um"', 'radius = "3.26 V"')
    path = tmp_path / "bad.toml"
    path.write_text(text, encoding="utf-8")
    code, out, err = run(capsys, "check", str(path))
    assert (code, out) == (BAD, "")
    assert {line.split(":")[0] for line in err.splitlines()} == {
        "chip.gap",
        "drive.frequency",
        "drive.waveform",
        "particle.1.radius",
    }


@pytest.mark.parametrize(
    "content",
    [b"", b"\xff\xfe", b"title =", b"#" * 5_000_000, b"schema = 2", b"a=" + b"[" * 50_000,
     b"a" + b".a" * 50_000 + b"=1", b"a" + b".a" * 300 + b"=1", b'title = "\\u001b[2J"'],
)  # fmt: skip
@pytest.mark.parametrize("command", [["check"], ["check", "--json"], ["spectrum"]])
def test_bad_files_end_in_words(capsys, tmp_path, content, command):
    path = tmp_path / "bad.toml"
    path.write_bytes(content)
    code, out, err = run(capsys, *command, str(path))
    assert (code, out) == (BAD, "")
    assert err.strip()
    assert "Traceback" not in err
    assert "\x1b" not in err


def test_files_that_cannot_be_read(capsys, tmp_path):
    for path in (tmp_path, tmp_path / "none.toml"):
        code, _, err = run(capsys, "check", str(path))
        assert code == BAD
        assert "cannot be opened" in err


def test_a_spectrum_is_a_table(capsys, write, yeast):
    code, out, _ = run(
        capsys, "spectrum", write(yeast), "--from", "10kHz", "--to", "1 MHz", "--points", "5"
    )
    assert code == GOOD
    rows = list(csv.reader(io.StringIO(out)))
    assert len(rows) == 6
    assert rows[0][0] == "frequency_Hz"
    assert [float(rows[1][0]), float(rows[-1][0])] == pytest.approx([1e4, 1e6])


@pytest.mark.parametrize(
    "options",
    [["--from", "10 MHz", "--to", "1 MHz"], ["--from", "0 Hz"], ["--from", "-1 kHz"],
     ["--from", "nan"], ["--from", "3 V"], ["--to", "1 THz"], ["--points", "1"],
     ["--points", "10000000"], ["--from", "x" * 300]],
)  # fmt: skip
def test_bad_ranges_end_in_words(capsys, write, yeast, options):
    joined = [f"{key}={value}" for key, value in zip(options[::2], options[1::2], strict=True)]
    code, out, err = run(capsys, "spectrum", write(yeast), *joined)
    assert (code, out) == (BAD, "")
    assert 0 < len(err) < 300


@pytest.mark.parametrize(
    "arguments",
    [[], ["juggle"], ["check"], ["spectrum", "x", "--points", "many"],
     ["serve", "--port", "99999"], ["serve", "--port", "0"], ["serve", "--port", "x"]],
)  # fmt: skip
def test_bad_commands_end_with_two(capsys, arguments):
    with pytest.raises(SystemExit) as caught:
        cli.main(arguments)
    assert caught.value.code == BAD
    assert "usage" in capsys.readouterr().err


def test_a_folder_without_profiles_is_told(capsys, tmp_path, monkeypatch):
    monkeypatch.setenv("SLACKWATER_CACHE", str(tmp_path / "cache"))
    code, _, err = run(capsys, "serve", "--profiles", str(tmp_path))
    assert code == BAD
    assert "holds no profile" in err


def test_a_bad_first_profile_is_told(capsys, tmp_path):
    path = tmp_path / "bad.toml"
    path.write_text("schema = 2")
    code, _, err = run(capsys, "serve", str(path))
    assert code == BAD
    assert "schema" in err


def test_a_bad_file_of_particles_is_told(capsys, tmp_path, monkeypatch):
    monkeypatch.setenv("SLACKWATER_CACHE", str(tmp_path / "cache"))
    path = tmp_path / "mine.toml"
    path.write_text('[[entry]]\nid = "mine"', encoding="utf-8")
    code, _, err = run(capsys, "serve", "--library", str(path))
    assert code == BAD
    assert "mine.toml" in err
    assert "entry.0.particle" in err


def test_particles_of_ones_own_reach_the_page(tmp_path, monkeypatch):
    given = []
    monkeypatch.setattr(app, "load_library", lambda path: given.append(path) or {})
    app.make_app(app.Settings(library=tmp_path / "mine.toml", cache_folder=tmp_path))
    assert given == [tmp_path / "mine.toml"]


def test_version(capsys):
    with pytest.raises(SystemExit) as caught:
        cli.main(["--version"])
    assert caught.value.code == GOOD
    assert capsys.readouterr().out.strip() == VERSION


def process(*arguments, **more):
    command = [sys.executable, "-m", "webapp.cli", *arguments]
    return subprocess.run(command, capture_output=True, timeout=120, check=False, **more)


def test_a_terminal_without_greek_is_no_failure(write, yeast, vary):
    environment = {**os.environ, "PYTHONIOENCODING": "ascii"}
    found = process("spectrum", write(vary(yeast, {"particle.0.name": "水"})), env=environment)
    assert found.returncode == GOOD
    assert found.stderr == b""


def test_a_reader_that_leaves_early_is_no_failure(write, yeast):
    command = [sys.executable, "-m", "webapp.cli", "spectrum", write(yeast), "--points=50000"]
    with subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE) as running:
        running.stdout.readline()
        running.stdout.close()
        assert running.stderr.read() == b""
        assert running.wait(timeout=120) == GOOD
