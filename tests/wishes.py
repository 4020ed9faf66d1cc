"""Edits of a design as the page asks for them."""

from model.profile import document
from webapp.edits import open_edit


def request_of(design, values=None, **more):
    """What the page posts."""
    return {
        "number": 1,
        "document": document(design),
        "values": values or {},
        "theme": "light",
        **more,
    }


def wished(design, do, at, word="", library=None, **values):
    """What opens after a wish, with some controls typed over; see :mod:`webapp.edits`."""
    wish = {"do": do, "at": at, "word": word}
    return open_edit(request_of(design, values, wish=wish), design, library or {})
