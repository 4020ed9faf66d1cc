"""Tasks, one file each; :data:`TASKS` maps the profile's ``kind`` to its class."""

from model.registry import scan, tag
from model.task import Task

TASKS = scan(__name__, Task, tag("kind"))
