"""What is each layer called in a file, and which colour tells it apart for the eye?"""

from __future__ import annotations

import re
from collections.abc import Mapping
from typing import NamedTuple

from layout.drawing.shapes import LAYERS, Layer
from layout.errors import FileError


class Colour(NamedTuple):
    """One colour: its number in DXF files, and the same as red, green, blue."""

    number: int
    rgb: str


# Chosen for this product: seen on white and on black, well apart, every family of operations in its
# own hues. They mean nothing to a machine.
COLOURS: dict[Layer, Colour] = {
    "CUT_OUTLINE": Colour(212, "#a500a5"),
    "CUT_SLOT": Colour(160, "#003fff"),
    "CUT_POCKET": Colour(132, "#00a5a5"),
    "CUT_FLOOR": Colour(150, "#007fff"),
    "DRILL_MARK": Colour(42, "#a57c00"),
    "DRILL_PIN": Colour(22, "#a52900"),
    "SCRIBE_STOP": Colour(92, "#00a500"),
    "ENGRAVE_LABEL": Colour(32, "#a55200"),
    "REF_CENTRE": Colour(251, "#656565"),
    "REF_STRING": Colour(253, "#999999"),
    "REF_LINE": Colour(142, "#007ca5"),
    "REF_BAR": Colour(8, "#808080"),
}

_NAME = re.compile(r"[A-Za-z_][A-Za-z0-9_-]{0,30}")
"""Names every reader takes: up to 31 plain characters (DXF R12), fit for an XML id (XML 1.0)."""


def name_layers(renamed: Mapping[str, str]) -> dict[Layer, str]:
    """Give every layer its name in the file.

    Parameters
    ----------
    renamed
        The maker's own names: layer to name.

    Raises
    ------
    FileError
        For a layer there is not, or a name that some reader would refuse.

    Examples
    --------
    >>> name_layers({"CUT_SLOT": "saw"})["CUT_SLOT"]
    'saw'
    >>> name_layers({"CUT_SLOT": "0.58 mm"})
    Traceback (most recent call last):
    ...
    layout.errors.FileError: layer CUT_SLOT cannot be called '0.58 mm'; a layer name has 1 to 31
    letters, digits, - or _, and begins with a letter or _

    """
    for layer, name in renamed.items():
        if layer not in LAYERS:
            raise FileError(f"there is no layer {layer}; the layers are {', '.join(LAYERS)}")
        if not _NAME.fullmatch(name):
            raise FileError(
                f"layer {layer} cannot be called {name!r}; a layer name has 1 to 31 letters, "
                "digits, - or _, and begins with a letter or _"
            )
    return {layer: renamed.get(layer, layer) for layer in LAYERS}
