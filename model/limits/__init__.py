"""Limits, one file each; :data:`LIMITS` maps each id (also its profile key) to the limit."""

from model.limit import Limit
from model.registry import scan

LIMITS = {name: entry() for name, entry in scan(__name__, Limit, lambda entry: entry.id).items()}
