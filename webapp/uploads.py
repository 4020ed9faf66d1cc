"""Field maps that visitors upload: kept by digest in a private folder, the oldest going first."""

import hashlib
import os
import tempfile
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from flask import Flask, request

from model.fields.field_header import FieldTableError
from model.fields.field_points import arranged
from model.fields.field_table import MAX_BYTES, read_field_table
from model.files import FileError, digest_of, is_digest
from model.quantity import plain_text

#: Most bytes that are kept of all maps together.
MOST_KEPT = 500 * 1024 * 1024


@dataclass(frozen=True)
class Uploads:
    """A folder of maps, each under the digest of its contents."""

    place: Path

    def keep(self, content: bytes) -> str:
        """Keep contents and return their digest."""
        self.place.mkdir(mode=0o700, parents=True, exist_ok=True)
        path = self.place / f"{hashlib.sha256(content).hexdigest()}.csv"
        # written aside first, so that nobody ever reads half a map
        handle, aside = tempfile.mkstemp(dir=self.place)
        with os.fdopen(handle, "wb") as file:
            file.write(content)
        Path(aside).replace(path)
        self._make_room(path)
        return digest_of(content)

    def __call__(self, name: str, digest: str) -> bytes:
        """Contents by digest, whatever their name.

        Raises
        ------
        FileError
            If no such map is kept.
        """
        found = sorted(self.place.glob(f"{digest}*.csv")) if is_digest(digest) else []
        for path in found[:1]:
            try:
                content = path.read_bytes()
                path.touch()  # what is used stays longest
            except OSError:
                break  # another visitor's map has just taken its place
            return content
        raise FileError("is not kept here; choose the file again")

    def _make_room(self, newest: Path) -> None:
        kept = sorted(self.place.glob("*.csv"), key=_age, reverse=True)
        room = MOST_KEPT
        for path in (newest, *(path for path in kept if path != newest)):
            size = path.stat().st_size if path.exists() else 0
            room -= size
            if room < 0 and path != newest:
                path.unlink(missing_ok=True)


def _age(path: Path) -> float:
    return path.stat().st_mtime if path.exists() else 0.0


def take_uploads(server: Flask, uploads: Uploads) -> None:
    """Take maps from the page: the answer has the values of the controls that follow from it."""

    @server.post("/maps")
    def take() -> Any:
        request.max_content_length = MAX_BYTES + 1024
        content = request.get_data(cache=False)
        try:
            window = arranged(read_field_table(content)).window
        except FieldTableError as problem:
            return {"problem": f"The field map {problem}."}
        left, right = window[:2]
        return {
            "values": {
                "chip.digest": uploads.keep(content),
                "chip.window_start": plain_text(left, "um"),
                "chip.window_length": plain_text(right - left, "um"),
            }
        }
