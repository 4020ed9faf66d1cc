"""The command line: check a profile, write spectra, serve the dashboard."""

import argparse
import gc
import io
import json
import os
import sys
import threading
import webbrowser
from collections.abc import Sequence
from pathlib import Path

import numpy as np

from model import DesignError, Folder, evaluate, load_profile
from model.quantity import QuantityError, parse_quantity
from model.summary import check_object, check_text, spectrum_rows
from model.version import VERSION
from webapp.cache import solve

INSIDE, OUTSIDE, BAD_INPUT = 0, 1, 2


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command and return its exit code: 0 fine, 1 outside the corridor, 2 bad input."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):  # a letter that a terminal lacks is no failure
            stream.reconfigure(errors="replace")
    options = _parser().parse_args(arguments)
    try:
        code = int(options.run(options))
        sys.stdout.flush()
        return code
    except BrokenPipeError:  # whoever read has had enough, e.g. `head`
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return INSIDE
    except DesignError as problem:
        for note in getattr(problem, "__notes__", []):
            print(note, file=sys.stderr)
        for error in problem.errors:
            print(error, file=sys.stderr)
        return BAD_INPUT
    except (OSError, QuantityError) as problem:
        print(problem, file=sys.stderr)
        return BAD_INPUT


def _check(options: argparse.Namespace) -> int:
    design = load_profile(options.profile)
    result = evaluate(design, solve(design, Folder(Path(options.profile).parent)))
    if options.json:
        print(json.dumps(check_object(result), indent=2, allow_nan=False))
    else:
        print(check_text(result))
    return INSIDE if result.inside else OUTSIDE


def _spectrum(options: argparse.Namespace) -> int:
    design = load_profile(options.profile)
    low, high = (_frequency(text) for text in (options.lowest, options.highest))
    if not 1.0 <= low < high <= 1e10 or not 2 <= options.points <= 100_000:
        raise QuantityError(
            "--from must lie below --to, both from 1 Hz to 10 GHz, with 2 to 100000 points"
        )
    for row in spectrum_rows(design, np.geomspace(low, high, options.points)):
        print(row)
    return INSIDE


def _frequency(text: str) -> float:
    try:
        return parse_quantity(text, "Hz")
    except QuantityError as problem:
        raise QuantityError(f"the frequency “{text[:40]}” {problem}") from None


def _serve(options: argparse.Namespace) -> int:
    # Imported here: the other commands need no web server and start faster without it.
    from waitress import serve

    from webapp.app import Settings, make_app
    from webapp.services import DEMO_PROFILES

    first = Path(options.profile) if options.profile else None
    if first is not None:
        load_profile(first)  # a bad profile is told before anything is set up
    folder = Path(options.profiles) if options.profiles else DEMO_PROFILES
    library = Path(options.library) if options.library else None
    app = make_app(Settings(profiles=folder, first=first, library=library))
    shown = "127.0.0.1" if options.host in ("0.0.0.0", "::") else options.host
    address = f"http://{shown}:{options.port}/"
    print(f"Slackwater {VERSION} is at {address} (stop with Ctrl-C)", flush=True)
    if options.open:
        threading.Timer(0.8, webbrowser.open, [address]).start()
    # What start-up made stays for good; the collector need not look at it at every answer.
    gc.collect()
    gc.freeze()
    serve(app.server, host=options.host, port=options.port, threads=8, ident=None)
    return INSIDE


def _port(text: str) -> int:
    if not text.isdecimal() or not 0 < int(text[:6]) < 65536:
        raise argparse.ArgumentTypeError("must be a whole number from 1 to 65535")
    return int(text)


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="slackwater",
        description="Finds the voltage corridor of a dielectrophoresis chip before it is made.",
    )
    parser.add_argument("--version", action="version", version=VERSION)
    commands = parser.add_subparsers(required=True, metavar="COMMAND")

    check = commands.add_parser("check", help="print verdict and limits ledger of a profile")
    check.add_argument("profile")
    check.add_argument("--json", action="store_true", help="print one JSON object")
    check.set_defaults(run=_check)

    spectrum = commands.add_parser("spectrum", help="print polarisation spectra as CSV")
    spectrum.add_argument("profile")
    spectrum.add_argument("--from", dest="lowest", default="1 kHz", metavar="FREQUENCY")
    spectrum.add_argument("--to", dest="highest", default="100 MHz", metavar="FREQUENCY")
    spectrum.add_argument("--points", type=int, default=400)
    spectrum.set_defaults(run=_spectrum)

    serve = commands.add_parser("serve", help="open the dashboard in a browser")
    serve.add_argument("profile", nargs="?", help="profile to show first")
    serve.add_argument("--host", default="127.0.0.1")
    serve.add_argument("--port", type=_port, default=8050)
    serve.add_argument("--profiles", metavar="DIR", help="folder of profiles to offer")
    serve.add_argument(
        "--library", metavar="FILE", help="particles of your own, offered beside the published ones"
    )
    serve.add_argument("--open", action="store_true", help="open the browser too")
    serve.set_defaults(run=_serve)
    return parser


if __name__ == "__main__":
    sys.exit(main())
