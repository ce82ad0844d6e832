"""Builder of a pressed contact: a file with [contact] in place of bolts and plates."""

from __future__ import annotations

from functools import partial

from slip.joint.contact import SHAPES, PressedContact
from slip.joint.loads import Case
from slip.joint.material import Material
from slip.read import loading
from slip.read.demands import interface, required
from slip.read.document import Document
from slip.read.reader import Reader, Stop
from slip.read.sections import Section, many, one

SIZES = ("radius", "flat_width", "length")
Sizes = tuple[float | None, float | None, float | None]  # radius, flat width, length [mm]
TAKEN = {  # sizes that a shape has
    "sphere": ("radius",),
    "cylinder": ("radius", "length"),
    "flat": ("flat_width", "length"),
    "rounded flat": ("radius", "flat_width", "length"),
}
PARTS = ("bolt", "tightening", "losses", "plate", "pattern", "axial", "standard")
NO_MATTER = ("one-face", "no-overturning")  # assumptions that a single pressed face does not make
ALONE = 1e-9  # of the shear; ends that differ more than this in direction are not on one line


def pressed(r: Reader, document: Document) -> PressedContact:
    """The contact of a document whose format was checked; raises Problems with every fault."""
    for name in PARTS:
        if name in document.tree:
            r.fail(
                (name,),
                "contact-with-bolts",
                f"[{name}] beside [contact]",
                "a contact or a joint with bolts",
                "remove one",
            )
    profile = r.attempt(partial(_profile, r))
    bodies = r.attempt(partial(_bodies, r))
    face = r.attempt(lambda: interface(r, one(r, "interface")))
    if "parallel_faces" in document.tree.get("interface", {}):
        path = ("interface", "parallel_faces")
        r.fail(path, "contact-load", "parallel_faces", "one face of a pressed contact", "leave it out")
    demands = r.attempt(lambda: required(r, one(r, "required")))
    cases = r.attempt(partial(_cases, r))
    r.finish()
    assert profile and bodies and face and demands and cases
    shape, sizes, force, bulk = profile
    return PressedContact(
        title=document.tree.get("title", ""),
        system=r.system,
        shape=shape,
        radius=sizes[0],
        flat_width=sizes[1],
        length=sizes[2],
        normal_force=force,
        bulk_stress=bulk,
        bodies=bodies,
        interface=face,
        required=demands,
        cases=cases,
        assumptions=tuple(note for note in r.assumptions if note.code not in NO_MATTER),
        warnings=tuple(r.warnings),
        digest=document.digest,
        file=document.file,
    )


def _profile(r: Reader) -> tuple[str, Sizes, float, float]:
    """Shape, sizes, normal force and bulk stress of [contact]."""
    section = one(r, "contact")
    shape = section.need("shape", "the profile", f"add shape, one of {', '.join(SHAPES)}")
    sizes = r.attempt(partial(_sizes, section, shape))
    force = section.need("normal_force", "the force that presses", 'add normal_force = "2 kN"')
    if sizes is None:
        raise Stop
    return shape, sizes, force, float(section.get("bulk_stress", 0.0))


def _sizes(section: Section, shape: str) -> Sizes:
    """Radius, flat width and length as the shape needs them."""
    for name in SIZES:
        if name not in section.values or name in TAKEN[shape]:
            continue
        others = [f'"{other}"' for other in SHAPES if name in TAKEN[other]]
        remedy = f"leave {name} out, or write shape = {' or '.join(others)}"
        section.stop_value(name, "key-not-of-shape", f'only {" and ".join(TAKEN[shape])} for shape = "{shape}"', remedy)
    radius = width = length = None
    if "radius" in TAKEN[shape]:
        radius = section.need("radius", f"the radius of a {shape}", 'add radius = "10 mm"')
    if "flat_width" in TAKEN[shape]:
        width = section.need("flat_width", "the width or diameter of the flat part", 'add flat_width = "8 mm"')
    if shape == "cylinder":
        length = section.need("length", "the length of a cylinder", 'add length = "20 mm"')
    elif "length" in TAKEN[shape]:
        length = section.get("length")
    return radius, width, length


def _bodies(r: Reader) -> tuple[Material, Material]:
    """Materials of the two bodies."""
    entries = many(r, "body[]")
    if len(entries) != 2:
        raise r.stop(
            ("body",), "wrong-count", f"{len(entries)} [[body]]", "the two bodies", "write two [[body]] with material"
        )
    first, second = (e.need("material", "of the body", 'add material = "steel"') for e in entries)
    return first, second


def _cases(r: Reader) -> tuple[Case, ...]:
    """Load cases of a contact: shear alone, both ends on one line."""
    found = loading.cases(r, None)
    for i, case in enumerate(found):
        path = ("case", i)
        loads = [load for _, load in case.ends]
        if (
            any(load.axial or any(load.moment) for load in loads)
            or case.at is not None
            or case.unsigned
            or case.thermal is not None
        ):
            remedy = "leave out axial, moment, at, peak and thermal"
            raise r.stop(path, "contact-load", "more than a shear", "shear alone on a pressed contact", remedy)
        if len(loads) == 2:
            (ax, ay), (bx, by) = loads[0].shear, loads[1].shear
            if abs(ax * by - ay * bx) > ALONE * max(ax * ax + ay * ay, bx * bx + by * by):
                raise r.stop(
                    path,
                    "contact-load",
                    "ends in two directions",
                    "both ends on one line",
                    "write a case for each direction",
                )
    if not found:
        raise Stop
    return found
