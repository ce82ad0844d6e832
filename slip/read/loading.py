"""Builders of what acts: load cases, and what an axial force means."""

from __future__ import annotations

from slip.joint.bolt import Bolt
from slip.joint.joint import Axial
from slip.joint.loads import Case, Load
from slip.joint.pattern import Pattern
from slip.joint.plates import Plate
from slip.read.assembly import ranged
from slip.read.hardware import need_springs
from slip.read.reader import Reader, Stop
from slip.read.sections import Section, many


def cases(r: Reader, pattern: Pattern | None) -> tuple[Case, ...]:
    sections = many(r, "case", "case[]")
    if not sections:
        raise r.stop(
            ("case",), "missing-key", "no [[case]]", "at least one load case", "add [[case]] with shear = [x, y]"
        )
    built = [r.attempt(lambda s=s, i=i: _case(r, s, i, pattern)) for i, s in enumerate(sections)]  # type: ignore[misc]
    if any(case is None for case in built):
        raise Stop
    cases = tuple(case for case in built if case is not None)
    names = [case.name for case in cases]
    doubles = sorted({name for name in names if names.count(name) > 1})
    if doubles:
        raise r.stop(("case",), "case-twice", ", ".join(doubles), "different case names", "rename one")
    return cases


def _case(r: Reader, s: Section, i: int, pattern: Pattern | None) -> Case:
    name = s.get("name", f"case {i + 1}")
    if not s.has("acts_on") and pattern is not None and pattern.count > 1:
        write = 'add acts_on = "joint" or "each bolt"'
        raise s.stop("acts_on", "missing-key", "nothing", f"what the loads act on, with {pattern.count} bolts", write)
    each = s.get("acts_on", "joint") == "each bolt"
    given = Load(tuple(s.get("shear", (0.0, 0.0))), s.get("axial", 0.0), tuple(s.get("moment", (0.0, 0.0, 0.0))))
    if each:
        for key in ("moment", "at"):
            if s.has(key):
                raise s.stop(
                    key,
                    "each-bolt-with-moment",
                    key,
                    'no moment and no point for "each bolt"',
                    'use acts_on = "joint", or bolt forces',
                )
    other = s.get("other_end")
    if each and other and "moment" in other:
        raise s.stop(
            "other_end", "each-bolt-with-moment", "moment", 'no moment for "each bolt"', 'use acts_on = "joint"'
        )
    at = s.get("at")
    height = at[2] if at is not None and len(at) == 3 else None
    if height is None and not each and given.shear != (0.0, 0.0):
        r.assume("no-overturning", "no overturning: shear acts in the sliding face", "case.at")
    peak = s.get("peak", "")
    unsigned = "unsigned" in peak
    if s.has("peak") and not unsigned:
        raise s.stop_value("peak", "peak-form", '"3 sigma, unsigned"', "a peak with known signs is an ordinary case")
    ends, alternating = _ends(r, s, name, given, unsigned)
    if unsigned:
        text = f"{name}: unsigned components; every combination of signs at full value"
        r.assume("unsigned", text, "case.peak")
    return Case(
        name,
        each,
        ends,
        (at[0], at[1]) if at is not None else None,
        height,
        alternating,
        unsigned,
        s.get("cycles"),
        s.get("thermal"),
    )


def _ends(r: Reader, s: Section, name: str, given: Load, unsigned: bool) -> tuple[tuple[tuple[str, Load], ...], bool]:
    """The ends between which the case moves, and whether it alternates."""
    kind = s.get("kind")
    both = [key for key in ("ratio", "other_end") if s.has(key)]
    if len(both) == 2:
        raise s.stop("other_end", "too-many-forms", "ratio and other_end", "one of them", "keep one")
    if kind == "static" and both:
        raise s.stop(
            both[0], "static-with-ratio", f"kind static with {both[0]}", "one end for a static case", "remove one"
        )
    if kind == "static":
        return (("given", given),), False
    if unsigned:  # the other signs are tried anyway
        return (("given", given),), True
    if not both:
        r.assume("ratio", f"{name}: alternating, ratio -1", "case.ratio")
    if s.has("other_end"):
        other = s.get("other_end")
        load = Load(
            tuple(other.get("shear", given.shear)),
            other.get("axial", given.axial),
            tuple(other.get("moment", given.moment)),
        )
    else:
        load = given.scaled(s.get("ratio", -1.0))
    return (("given", given), ("other", load)), True


def axial(
    r: Reader, s: Section, plates: tuple[Plate, ...] | None, bolt: Bolt | None, cases: tuple[Case, ...] | None
) -> Axial:
    meaning = s.get("meaning")
    if meaning in ("bolt force", "bolt force change"):
        s.need(
            "model_bolt_share",
            f'for meaning = "{meaning}": external = change / model_bolt_share',
            'add model_bolt_share = "15 %"',
        )
    if meaning == "bolt force":
        s.need("model_preload", 'for meaning = "bolt force", which holds the preload', "add model_preload")
    share, introduction = ranged(s, "bolt_share"), s.get("load_introduction")
    if share is not None and introduction is not None:
        raise s.stop(
            "load_introduction", "too-many-forms", "bolt_share and load_introduction", "one of them", "keep one"
        )
    if introduction is not None and plates is not None and bolt is not None:
        need_springs(r, plates, bolt, "load_introduction", "give bolt_share")
    if any(case.each_bolt and case.pulls for case in cases or ()) and meaning is None:
        write = 'add [axial] meaning = "external", "bolt force" or "bolt force change"'
        raise s.stop("meaning", "missing-key", "nothing", "what the axial force of each bolt is", write)
    if any(case.pulls for case in cases or ()) and share is None and introduction is None:
        r.assume(
            "bolt-share", "bolt share 0 for the clamp, the full spring ratio for the bolt force", "axial.bolt_share"
        )
    return Axial(
        meaning,
        s.get("model_preload"),
        s.get("model_bolt_share"),
        share,
        introduction,
        s.get("credit_compression", False),
    )
