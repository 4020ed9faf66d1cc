"""Electrode layouts, one file each; :data:`LAYOUTS` maps the profile's ``layout`` to its class."""

from model.layout import Layout
from model.registry import scan, tag

LAYOUTS = scan(__name__, Layout, tag("layout"))
