"""The program's version, as installed."""

from importlib.metadata import version

VERSION = version("slackwater")
