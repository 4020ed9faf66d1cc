"""Every check that a change must pass, in one command: ``python -m tests``."""

import shutil
import subprocess
import sys

CHROMIUM = ("chromium", "chromium-browser", "google-chrome", "google-chrome-stable")
CHECKS = (
    ("format", ["-m", "ruff", "format", "--check", "."]),
    ("lint", ["-m", "ruff", "check", "."]),
    ("types", ["-m", "mypy"]),
    (
        "import contracts",
        ["-c", "import sys, importlinter.cli as cli; sys.exit(cli.lint_imports_command())"],
    ),
    ("tests", ["-m", "pytest", "-q"]),
)


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
    for name, arguments in CHECKS:
        print(f"== {name}", flush=True)
        if subprocess.run([sys.executable, *arguments], check=False).returncode:
            failed.append(name)
    print(f"failed: {', '.join(failed)}" if failed else "all checks passed")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
