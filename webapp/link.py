"""The address: a whole design in the part of a link behind ``#``.

That part never leaves the browser with a request, so a design stays out of server logs and
referrers. Layout: ``1.<check>.<payload>`` with the version of the codec, a check over all that the
link says, and the profile as ``path=value`` lines, deflated with a preset dictionary and in
URL-safe base64. A link that was cut still yields its first lines.
"""

import base64
import hashlib
import json
import re
import zlib
from collections.abc import Iterator, Mapping
from typing import Any

from model.design import Design
from model.profile import MOST_LEVELS, document

VERSION = "1"
#: Longest address part that is read, characters, and most text it may unpack to, bytes.
MAX_CHARACTERS, MAX_BYTES = 64_000, 256_000
#: What stands behind a link in running text; no link made here ends with it.
_PUNCTUATION = ".,;:!?)>]}'\""
_LETTERS = re.compile("[A-Za-z0-9_-]*")
#: Frequent text, so that short profiles pack well. Part of version 1: never change it.
_DICTIONARY = b"""schema=1
title="question="task.kind="hold"
task.dielectrophoresis="positive"negative"
task.working_height="10 um"
chip.layout="coplanar-bars"
chip.bar_width="40 um"
chip.gap="40 um"
chip.bar_count=60
chip.channel_height="100 um"
chip.channel_width="2 mm"
chip.floor.material="glass"
chip.floor.thickness="700 um"
chip.floor.outside="held"
chip.lid.material="pdms"
chip.lid.thickness="4000 um"
chip.lid.outside="still-air"
liquid.conductivity="30 mS/m"
liquid.temperature="22 degC"
liquid.conductivity_per_kelvin="2 %/K"
drive.voltage="8 V"
drive.frequency="500 kHz"
drive.source_resistance="50 ohm"
drive.voltage_limit="20 V"
drive.current_limit="200 mA"
drive.duty=1.0
flow.rate="5 uL/min"
particle.0.name="
particle.0.role="collect"pass"watch"
particle.0.must_live=true
particle.0.must_live=false
particle.0.kind="solid-sphere"
particle.0.kind="shelled-sphere"
particle.0.density="1050 kg/m^3"
particle.0.radius="4 um"
particle.0.radius_cv=0.08
particle.0.relative_permittivity=2.55
particle.0.conductivity="0 S/m"
particle.0.surface_conductance="1 nS"
particle.0.core.relative_permittivity=60.0
particle.0.core.conductivity="0.5 S/m"
particle.0.layers.0.name="membrane"
particle.0.layers.0.capacitance="10 mF/m^2"
particle.0.layers.0.conductance="100 S/m^2"
particle.0.layers.0.thickness="8 nm"
particle.0.layers.0.relative_permittivity=6.0
particle.0.layers.0.conductivity="0.25 uS/m"
particle.0.layers.1.name="wall"
limits.temperature_rise="4 K"
limits.highest_temperature="37 degC"
limits.electrothermal_ratio=0.3
limits.membrane_voltage="0.3 V"
"""


class LinkError(ValueError):
    """A link of which nothing can be used; the message says why in plain words."""


def encode(design: Design) -> str:
    """Write a design as the address part, without the ``#``."""
    text = "".join(f"{path}={json.dumps(value)}\n" for path, value in flatten(document(design)))
    packer = zlib.compressobj(9, zlib.DEFLATED, -15, zdict=_DICTIONARY)
    packed = packer.compress(text.encode()) + packer.flush()
    payload = base64.urlsafe_b64encode(packed).decode().rstrip("=")
    return f"{VERSION}.{_check(text)}.{payload}"


def decode(address: str) -> tuple[dict[str, Any], bool]:
    """Read an address part into profile data, and tell whether it arrived whole.

    What a cut or damaged link still holds is returned too.

    Raises
    ------
    LinkError
        If nothing can be read.
    """
    pieces = address.removeprefix("#").rstrip(_PUNCTUATION).split(".")
    if len(address) > MAX_CHARACTERS:
        raise LinkError("the link is longer than any that is made here")
    if len(pieces) != 3:
        raise LinkError("the link is none that was made here, or it was cut short")
    version, stated, payload = pieces
    if version != VERSION:
        raise LinkError(f"the link has version {version[:8]}, this program reads version {VERSION}")
    text = _unpack(_packed(payload))
    values = dict(_lines(text))
    if not values:
        raise LinkError("the link is damaged; nothing in it can be read")
    return unflatten(values), stated == _check(text)


def _check(text: str) -> str:
    """Eight hexadecimal digits over everything that a link says."""
    return hashlib.sha256(text.encode()).hexdigest()[:8]


def _packed(payload: str) -> bytes:
    """Bytes of the payload up to its first foreign character."""
    match = _LETTERS.match(payload)
    letters = match.group() if match else ""
    if len(letters) % 4 == 1:  # one letter alone holds no byte
        letters = letters[:-1]
    return base64.urlsafe_b64decode(letters + "=" * (-len(letters) % 4))


def _unpack(packed: bytes) -> str:
    """Inflate as much as can be; byte by byte, so that damage costs only what lies behind it."""
    unpacker = zlib.decompressobj(-15, zdict=_DICTIONARY)
    text = b""
    for index in range(len(packed)):
        try:
            text += unpacker.decompress(packed[index : index + 1], MAX_BYTES - len(text))
        except zlib.error:
            break
        if len(text) >= MAX_BYTES:
            break
    return text.decode("utf-8", "ignore")


def _lines(text: str) -> Iterator[tuple[str, Any]]:
    """Whole lines of the form path=value; anything else is damage and left out."""
    whole = text[: text.rfind("\n") + 1]
    for line in whole.splitlines():
        path, _, text = line.partition("=")
        try:
            value = json.loads(text)
        except (ValueError, RecursionError):  # ValueError: also numbers of endless digits
            continue
        if isinstance(value, str | int | float) and path.count(".") < MOST_LEVELS:
            yield path, value


def flatten(data: Any, path: str = "") -> Iterator[tuple[str, Any]]:
    """Every scalar of nested plain data with its dotted path.

    >>> list(flatten({"a": {"b": 1}, "c": [{"d": "x"}]}))
    [('a.b', 1), ('c.0.d', 'x')]
    """
    if isinstance(data, Mapping):
        for key, value in data.items():
            yield from flatten(value, f"{path}.{key}" if path else str(key))
    elif isinstance(data, list):
        for index, value in enumerate(data):
            yield from flatten(value, f"{path}.{index}")
    else:
        yield path, data


def unflatten(values: Mapping[str, Any]) -> dict[str, Any]:
    """Undo :func:`flatten`; numbered keys become lists in the order of their numbers.

    >>> unflatten({"a.b": 1, "c.0.d": "x"})
    {'a': {'b': 1}, 'c': [{'d': 'x'}]}
    """
    tree: dict[str, Any] = {}
    for path, value in values.items():
        *parents, last = path.split(".")
        place = tree
        for key in parents:
            inner = place.setdefault(key, {})
            if not isinstance(inner, dict):
                break
            place = inner
        else:
            place[last] = value
    listed = _listed(tree)
    return listed if isinstance(listed, dict) else {}


def _listed(tree: Any) -> Any:
    if not isinstance(tree, dict):
        return tree
    inner = {key: _listed(value) for key, value in tree.items()}
    if inner and all(key.isdecimal() and len(key) < 4 for key in inner):
        return [inner[key] for key in sorted(inner, key=int)]
    return inner
