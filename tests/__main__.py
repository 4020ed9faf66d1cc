"""Every check that a change must pass, in one command: ``python -m tests``.

``python -m tests long`` runs the few long ones instead, which repeat on larger chips what others
assert too.
"""

import os
import shutil
import subprocess
import sys

CHROMIUM = ("chromium", "chromium-browser", "google-chrome", "google-chrome-stable")
#: One file to a process, as each solves its chips but once; browsers wait for a quiet machine.
_PYTEST = ["-m", "pytest", "-q", "--durations", "15", "-n", "auto", "--dist", "loadfile"]
CHECKS = (
    ("format", ["-m", "ruff", "format", "--check", "."]),
    ("lint", ["-m", "ruff", "check", "."]),
    ("types", ["-m", "mypy"]),
    (
        "import contracts",
        ["-c", "import sys, importlinter.cli as cli; sys.exit(cli.lint_imports_command())"],
    ),
    ("tests", [*_PYTEST, "-m", "not browser and not long"]),
    ("browser tests", [*_PYTEST, "-m", "browser"]),
)
LONG = (("long tests", [*_PYTEST, "-m", "long"]),)
#: Each process on one thread of linear algebra, as a second gains nothing.
_SETTING = {**os.environ, "OMP_NUM_THREADS": "1", "OPENBLAS_NUM_THREADS": "1"}


def main() -> int:
    """Run all checks, tell which failed, and give 1 if any did."""
    if not any(map(shutil.which, CHROMIUM)):
        print(
            "The browser tests need the system's Chromium and there is none.\n"
            "Debian or Ubuntu: sudo apt-get update && sudo apt-get install -y chromium\n"
            "Fedora: sudo dnf install chromium. macOS: brew install --cask chromium.\n"
            "Without a browser, all other tests: python -m pytest -m 'not browser'",
            file=sys.stderr,
        )
        return 1
    failed = []
    for name, arguments in LONG if sys.argv[1:] == ["long"] else CHECKS:
        print(f"== {name}", flush=True)
        if subprocess.run([sys.executable, *arguments], check=False, env=_SETTING).returncode:
            failed.append(name)
    print(f"failed: {', '.join(failed)}" if failed else "all checks passed")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
