"""The dialog of published particles: all of them are listed with what is known of their numbers."""

import pytest

from model.library import load_library
from tests.wishes import wished
from webapp.views.library import library_list

LIBRARY = load_library()


def test_every_particle_is_listed_once_under_its_group():
    groups = library_list(LIBRARY.values())
    assert [group["group"] for group in groups] == sorted({group["group"] for group in groups})
    listed = [entry["id"] for group in groups for entry in group["entries"]]
    assert sorted(listed) == sorted(LIBRARY)


def test_an_entry_tells_its_source_and_where_each_number_comes_from():
    for group in library_list(LIBRARY.values()):
        for entry in group["entries"]:
            assert entry["title"]
            assert entry["source"]
            assert entry["numbers"], "size at least"
            for row in entry["rows"]:
                assert row["word"] in ("read", "from memory", "assumed")
                assert row["remark"] or row["status"] != "assumed"


@pytest.mark.parametrize("key", LIBRARY)
def test_every_particle_can_be_added(yeast, key):
    starts = {name: entry.particle_document() for name, entry in LIBRARY.items()}
    opened, _ = wished(yeast, "add", "particle", key, starts)
    assert opened.problems == ()
    assert opened.design.particles[-1].source == LIBRARY[key].source
