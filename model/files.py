"""Files that a design names: how their contents are found, and nothing outside given folders."""

import hashlib
import string
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from pathlib import Path, PurePosixPath, PureWindowsPath

#: Gives the contents of a file by name and digest; the digest may be empty or cut short.
Files = Callable[[str, str], bytes]
#: Hexadecimal digits of a digest that designs keep, and fewest that tell files apart.
DIGITS, FEWEST_DIGITS = 16, 8
#: Largest file that is read.
MOST_BYTES = 64 * 1024 * 1024


class FileError(ValueError):
    """A file that cannot be had; the message goes on where its name ends."""


def digest_of(content: bytes) -> str:
    """Digits that tell contents apart: the start of their SHA-256."""
    return hashlib.sha256(content).hexdigest()[:DIGITS]


def is_digest(text: str) -> bool:
    """Whether text can be the digest of a file."""
    return FEWEST_DIGITS <= len(text) <= 64 and set(text) <= set(string.hexdigits.lower())


def no_files(name: str, digest: str) -> bytes:
    """Files where there are none."""
    raise FileError("is not at hand; only the program that keeps it can open this design")


def either(*sources: Files) -> Files:
    """The first of several sources that has the file; if none has, the last one's complaint."""

    def found(name: str, digest: str) -> bytes:
        for source in sources[:-1]:
            try:
                return source(name, digest)
            except FileError:
                continue
        return sources[-1](name, digest)

    return found


@dataclass(frozen=True)
class Held:
    """Contents in memory, each under its digest.

    Raises
    ------
    FileError
        When called, if there is none with the digest.
    """

    contents: Mapping[str, bytes]

    def __call__(self, name: str, digest: str) -> bytes:
        """Contents by digest, whatever their name."""
        for known, content in self.contents.items():
            if is_digest(digest) and (known.startswith(digest) or digest.startswith(known)):
                return content
        raise FileError("is not at hand")


@dataclass(frozen=True)
class Folder:
    """Files in a folder and below it; names that lead out of it are refused.

    Raises
    ------
    FileError
        When called, if the name leads out, there is no such file, it is too large, or its
        contents are not those of the digest.
    """

    place: Path

    def __call__(self, name: str, digest: str) -> bytes:
        """Contents of a file."""
        path = self._path(name)
        try:
            with path.open("rb") as file:
                content = file.read(MOST_BYTES + 1)
        except FileNotFoundError:
            raise FileError("is not in the folder of the profile") from None
        except (OSError, ValueError) as problem:
            reason = getattr(problem, "strerror", None) or "no such name"
            raise FileError(f"cannot be opened: {reason}") from None
        if len(content) > MOST_BYTES:
            raise FileError(f"is larger than {MOST_BYTES // 1024**2} MB")
        if digest and not hashlib.sha256(content).hexdigest().startswith(digest):
            raise FileError(
                f"has changed: its digest is {digest_of(content)}, the design was made with "
                f"{digest}. Choose it anew, or clear the digest"
            )
        return content

    def _path(self, name: str) -> Path:
        parts = PurePosixPath(name).parts
        foreign = "\\" in name or PureWindowsPath(name).drive or not name.isprintable()
        if not parts or name.startswith("/") or ".." in parts or foreign:
            raise FileError("must be the name of a file in the folder of the profile, no path away")
        try:
            path = self.place.joinpath(*parts).resolve()
            inside = path.is_relative_to(self.place.resolve())
        except (OSError, ValueError, RuntimeError):  # a name too long, or links in a circle
            inside = False
        if not inside:
            raise FileError("must be the name of a file in the folder of the profile, no path away")
        return path
