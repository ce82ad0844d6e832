"""Builder of [finite_elements]."""

from __future__ import annotations

from slip.joint.elements import Elements
from slip.read.reader import Reader
from slip.read.sections import Section


def elements(r: Reader, s: Section) -> Elements:
    """[finite_elements]; what is taken where the file is silent is listed once any of its keys is there."""
    size = s.get("element_size")
    dimension = int(s.get("dimension", 2 if s.has("width") else 3))
    if s.has("width") and dimension == 3:
        expected, write = "a width only with dimension = 2", "remove width, or write dimension = 2"
        raise s.stop_value("width", "width-in-3d", expected, write)
    if s.raw:
        if not s.has("element_order"):
            r.assume("element-order", "elements of the first order: four-node faces", "finite_elements.element_order")
        if not s.has("scheme"):
            r.assume("scheme", "implicit time integration", "finite_elements.scheme")
        if not s.has("precision"):
            r.assume("precision", "double precision", "finite_elements.precision")
    return Elements(
        purpose=s.get("purpose"),
        present=s.get("present"),
        present_normal=s.get("present_normal"),
        friction=s.get("friction"),
        element_size=None if size is None else (size, size) if isinstance(size, float) else tuple(size),
        element_depth=s.get("element_depth"),
        element_order=int(s.get("element_order", 1)),
        dimension=dimension,
        width=s.get("width"),
        unknowns=s.get("unknowns"),
        steps_per_cycle=None if s.get("steps_per_cycle") is None else int(s.get("steps_per_cycle")),
        scheme=s.get("scheme", "implicit"),
        precision=s.get("precision", "double"),
    )
