"""Particle kinds, one file each; :data:`PARTICLES` maps the profile's ``kind`` to its class."""

from model.particle import Particle
from model.registry import scan, tag

PARTICLES = scan(__name__, Particle, tag("kind"))
