"""Builder of a face of known pressure: a file with [interface] pressure and plates, in place of bolts that clamp."""

from __future__ import annotations

from functools import partial

from slip.joint.contact import PressedFace
from slip.joint.loads import Case
from slip.joint.plates import Plate, Rectangle, Ring
from slip.joint.surface import Interface
from slip.read import hardware, loading
from slip.read.demands import interface, required
from slip.read.document import Document
from slip.read.elements import elements
from slip.read.reader import Reader, Stop
from slip.read.sections import one

BOLTED = ("bolt", "tightening", "pattern")
OF_BOLTS = ("losses", "axial", "standard", "loosening")  # what has no meaning without bolts


def describes_face(document: Document) -> bool:
    """Whether a document describes a face of known pressure: a pressure, and no bolts."""
    surface = document.tree.get("interface")
    return isinstance(surface, dict) and "pressure" in surface and not any(name in document.tree for name in BOLTED)


def face(r: Reader, document: Document) -> PressedFace:
    """The face of a document whose format was checked; raises Problems with every fault."""
    for name in OF_BOLTS:
        if name in document.tree:
            found, expected = f"[{name}] beside [interface] pressure", "no table that speaks of bolts"
            r.fail((name,), "pressure-twice", found, expected, f"remove [{name}], or describe a joint with bolts")
    plates = r.attempt(lambda: hardware.plates(r, None, None))
    surface = r.attempt(lambda: interface(r, one(r, "interface"), known=True))
    overlap = r.attempt(partial(_overlap, r, plates, surface))
    demands = r.attempt(lambda: required(r, one(r, "required")))
    cases = r.attempt(partial(_cases, r))
    mesh = r.attempt(lambda: elements(r, one(r, "finite_elements")))
    r.finish()
    assert plates and surface and overlap and demands and cases and mesh
    return PressedFace(
        title=document.tree.get("title", ""),
        system=r.system,
        plates=plates,
        overlap=overlap,
        interface=surface,
        required=demands,
        cases=cases,
        elements=mesh,
        assumptions=tuple(r.assumptions),
        warnings=tuple(r.warnings),
        digest=document.digest,
        file=document.file,
    )


def _overlap(r: Reader, plates: tuple[Plate, ...] | None, surface: Interface | None) -> Rectangle | Ring:
    """Where all plates lie on each other."""
    if plates is None or surface is None:
        raise Stop
    faces = surface.parallel_faces
    if len(plates) != faces + 1 or faces > 2:
        expected = "two plates, or three with parallel_faces = 2"
        found = f"{len(plates)} [[plate]] and {faces} face{'' if faces == 1 else 's'}"
        raise r.stop(("plate",), "face-plates", found, expected, "write the plates that touch at the face")
    outlines = [plate.outline for plate in plates]
    for i, outline in enumerate(outlines):
        if outline is None:
            expected, write = "the outline, over whose overlap the pressure acts", "add outline = [x0, y0, x1, y1]"
            raise r.stop(("plate", i, "outline"), "missing-key", "nothing", expected, write)
    shared = [common(a, b) for a, b in zip(outlines, outlines[1:], strict=False)]
    if any(area is None for area in shared):
        expected = "outlines that overlap, all rectangles or all rings"
        raise r.stop(("plate",), "face-plates", "no overlap that can be worked out", expected, "correct the outlines")
    if any(area != shared[0] for area in shared):
        found, expected = "two faces that overlap unlike", "the same overlap at both faces"
        raise r.stop(("plate",), "face-plates", found, expected, "correct the outlines, or write a file for each face")
    assert shared[0] is not None
    return shared[0]


def common(a: Rectangle | Ring | None, b: Rectangle | Ring | None) -> Rectangle | Ring | None:
    """What two outlines of one kind have in common; None where that is nothing."""
    if isinstance(a, Rectangle) and isinstance(b, Rectangle):
        both = Rectangle(max(a.x0, b.x0), max(a.y0, b.y0), min(a.x1, b.x1), min(a.y1, b.y1))
        return both if both.x0 < both.x1 and both.y0 < both.y1 else None
    if isinstance(a, Ring) and isinstance(b, Ring):
        ring = Ring(min(a.outer_diameter, b.outer_diameter), max(a.inner_diameter, b.inner_diameter))
        return ring if ring.inner_diameter < ring.outer_diameter else None
    return None


def _cases(r: Reader) -> tuple[Case, ...]:
    """Load cases of a face: shear and a moment about the normal, which leave the pressure as it is."""
    found = loading.cases(r, None)
    for i, case in enumerate(found):
        tilts = any(load.axial or load.moment[0] or load.moment[1] for _, load in case.ends) or case.height
        if tilts or case.each_bolt or case.unsigned or case.thermal is not None:
            expected = "shear and a moment about the normal, in the sliding face"
            remedy = "leave out axial, tilting moments, a height of at, acts_on each bolt, peak and thermal"
            raise r.stop(("case", i), "face-load", "more than a known pressure carries", expected, remedy)
    return found
