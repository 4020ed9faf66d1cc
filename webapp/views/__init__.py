"""Views: each has a layout, made once, and a pure function from a result to what fills it."""

from webapp.answer import ViewPart
from webapp.views.corridor import corridor_part
from webapp.views.polarisation import polarisation_part
from webapp.views.section import section_part

#: What fills each view, by its name in a request.
VIEWS: dict[str, ViewPart] = {
    "corridor": corridor_part,
    "polarisation": polarisation_part,
    "section": section_part,
}
