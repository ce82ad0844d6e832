"""Builders of what acts: load cases, and what an axial force means."""

from __future__ import annotations

import re
from functools import partial

from slip.joint.bolt import Bolt
from slip.joint.joint import Axial
from slip.joint.loads import Case, Load
from slip.joint.pattern import Pattern
from slip.joint.plates import Plate
from slip.read.assembly import ranged
from slip.read.hardware import need_springs
from slip.read.reader import Reader, Stop, show
from slip.read.sections import Section, many

PEAK = re.compile(r"\s*(\d+(?:\.\d+)?)\s*sigma\s*,\s*unsigned\s*$")
SIGMAS = 3.0  # peaks of a random response below this are said to be low (practice)
COMPONENTS = ("shear", "axial", "moment")
Ends = tuple[tuple[str, Load], ...]


def cases(r: Reader, pattern: Pattern | None, in_table: bool = False) -> tuple[Case, ...]:
    """All [[case]] of different names; at least one, unless the cases stand in a table."""
    sections = many(r, "case[]")
    if not sections and not in_table:
        write = 'add [[case]] with shear = ["0 kN", "24 kN"]'
        raise r.stop(("case",), "missing-key", "no [[case]]", "at least one load case", write)
    built = r.every(partial(_case, r, s, i, pattern) for i, s in enumerate(sections))
    names = [case.name for case in built]
    for i, name in enumerate(names):
        if name in names[:i]:
            found = f"a second case {show(name)}"
            raise sections[i].stop("name", "case-twice", found, "different case names", "rename one")
    return tuple(built)


def _case(r: Reader, s: Section, i: int, pattern: Pattern | None) -> Case:
    name, each = s.get("name", f"case {i + 1}"), _acts_on_each(s, pattern)
    if not any(s.has(key) for key in (*COMPONENTS, "other_end")):
        expected, write = (
            "a load: shear, axial or moment",
            'add shear = ["0 kN", "24 kN"], or zeros if no load is meant',
        )
        raise s.stop("shear", "missing-key", "nothing", expected, write)
    unsigned = _unsigned(s)
    if each and _holds_preload(r):
        _needs_both_ends(s, unsigned)
    given = Load(tuple(s.get("shear", (0.0, 0.0))), s.get("axial", 0.0), tuple(s.get("moment", (0.0, 0.0, 0.0))))
    ends, alternating = _ends(r, s, name, given, unsigned)
    at = s.get("at")
    height = at[2] if at is not None and len(at) == 3 else None
    if height is None and not each and any(load.shear != (0.0, 0.0) for _, load in ends):
        r.assume("no-overturning", "no overturning: shear acts in the sliding face", "case.at")
    if unsigned:
        text = f"{name}: unsigned {s.get('peak').split(',')[0].strip()} peaks; every combination of signs at full value"
        r.assume("unsigned", text, "case.peak")
    place = (at[0], at[1]) if at is not None else None
    return Case(name, each, ends, place, height, alternating, unsigned, s.get("cycles"), s.get("thermal"))


def _acts_on_each(s: Section, pattern: Pattern | None) -> bool:
    """Whether the loads act on each bolt; then there is no moment, and no point where they act."""
    count = pattern.count if pattern is not None else 1
    if count > 1 and not s.has("acts_on"):
        write = 'add acts_on = "joint" or acts_on = "each bolt"'
        raise s.stop("acts_on", "missing-key", "nothing", f"what the loads act on, with {count} bolts", write)
    if s.get("acts_on", "joint") == "joint":
        return False
    wrong = [key for key in ("moment", "at") if s.has(key)]
    wrong += ["other_end"] * ("moment" in (s.get("other_end") or {}))
    if wrong:
        expected, write = 'only shear and axial on "each bolt"', 'remove it, or write acts_on = "joint"'
        raise s.stop_value(wrong[0], "each-bolt-with-moment", expected, write)
    return True


def _holds_preload(r: Reader) -> bool:
    """Whether the axial force of a bolt is its whole force, preload included."""
    axial = r.document.tree.get("axial")
    return isinstance(axial, dict) and axial.get("meaning") == "bolt force"


def _needs_both_ends(s: Section, unsigned: bool) -> None:
    """A force that holds the preload can be neither left out, nor scaled to the other end, nor turned round."""
    s.need("axial", 'the force of each bolt in the model, for meaning = "bolt force"', 'add axial = "95 kN"')
    if unsigned or (s.get("kind") != "static" and not s.has("other_end")):
        key = "peak" if unsigned else "ratio"
        found = f'{key} with meaning = "bolt force"' if s.has(key) else "no other_end"
        write = 'write other_end, or give changes of the bolt force and meaning = "bolt force change"'
        raise s.stop(key, "bolt-force-scaled", found, "both ends of a force that holds the preload", write)


def _unsigned(s: Section) -> bool:
    """Whether the components are peaks of a random response, without sign and phase."""
    if not s.has("peak"):
        return False
    form = PEAK.match(s.get("peak"))
    if form is None:
        remedy = "write a peak with known signs as an ordinary case, without this key"
        raise s.stop_value("peak", "peak-form", '"3 sigma, unsigned"', remedy)
    if s.get("kind") == "static":
        remedy = 'leave out kind, or write kind = "alternating"'
        raise s.stop_value("peak", "static-with-ratio", "no static case: a random response alternates", remedy)
    if float(form.group(1)) < SIGMAS:
        text = f"{s.get('name', 'a case')}: a peak of {float(form.group(1)):g} sigma is exceeded often"
        s.reader.warn("peak-low", text, "case.peak")
    both = [key for key in ("ratio", "other_end") if s.has(key)]
    if both:
        expected = "no other end: unsigned components take every sign anyway"
        raise s.stop(both[0], "too-many-forms", f"peak and {both[0]}", expected, f"remove {both[0]}")
    return True


def _ends(r: Reader, s: Section, name: str, given: Load, unsigned: bool) -> tuple[Ends, bool]:
    """The ends between which the case moves, and whether it alternates."""
    kind = s.get("kind")
    both = [key for key in ("ratio", "other_end") if s.has(key)]
    if len(both) == 2:
        raise s.stop("other_end", "too-many-forms", "ratio and other_end", "one of them", "keep one")
    if kind == "static" and both:
        remedy = f'remove {both[0]}, or write kind = "alternating"'
        raise s.stop(both[0], "static-with-ratio", f"kind static with {both[0]}", "one end for a static case", remedy)
    if kind == "static":
        return (("given", given),), False
    if unsigned:  # the other signs are tried anyway
        return (("given", given),), True
    if not both:
        r.assume("ratio", f"{name}: alternating, ratio -1", "case.ratio")
    if s.has("other_end"):
        other = s.get("other_end")
        shear, axial, moment = (other.get(key, getattr(given, key)) for key in COMPONENTS)
        return (("given", given), ("other", Load(tuple(shear), axial, tuple(moment)))), True
    return (("given", given), ("other", given.scaled(s.get("ratio", -1.0)))), True


def axial(
    r: Reader,
    s: Section,
    plates: tuple[Plate, ...] | None,
    bolt: Bolt | None,
    cases: tuple[Case, ...] | None,
    in_table: bool = False,
) -> Axial:
    """[axial]; what the share of the bolt is taken as when the file is silent is said. A table of cases may have axial forces."""
    meaning, share, introduction = _meaning(s, cases), ranged(s, "bolt_share"), s.get("load_introduction")
    if share is not None and introduction is not None:
        found = "bolt_share and load_introduction"
        raise s.stop("load_introduction", "too-many-forms", found, "one of them", "keep one")
    if plates is None or bolt is None or cases is None:
        raise Stop
    if introduction is not None:
        need_springs(r, plates, bolt, "load_introduction", "give bolt_share")
    pulls = in_table or any(_has_axial(case) for case in cases)
    if pulls and share is None and introduction is None:
        text = "bolt share 0 for the clamp, the full spring ratio for the bolt force"
        r.assume("bolt-share", text, "axial.bolt_share")
    if pulls:
        r.assume("prying", "prying is not computed: axial forces must include it", "case.axial")
    model = s.get("model_preload"), s.get("model_bolt_share")
    return Axial(meaning, *model, share, introduction, s.get("credit_compression", False))


def _meaning(s: Section, cases: tuple[Case, ...] | None) -> str | None:
    """What an axial force is, with all that this meaning needs."""
    meaning: str | None = s.get("meaning")
    if meaning in ("bolt force", "bolt force change"):
        why = f'the bolt\'s share in the model, for meaning = "{meaning}": external = change / model_bolt_share'
        s.need("model_bolt_share", why, 'add model_bolt_share = "15 %"')
    if meaning == "bolt force":
        why = 'the preload in the model, for meaning = "bolt force", which holds it'
        s.need("model_preload", why, 'add model_preload = "90 kN"')
    if meaning in ("bolt force", "bolt force change"):
        _of_each_bolt(s, meaning, cases or ())
    if any(case.each_bolt and _has_axial(case) for case in cases or ()):
        write = 'add [axial] meaning = "external", "bolt force" or "bolt force change"'
        s.need("meaning", "what the axial force of each bolt is", write)
    return meaning


def _of_each_bolt(s: Section, meaning: str, cases: tuple[Case, ...]) -> None:
    """A model's bolt force is that of one bolt: it may not be shared over the bolts of a joint."""
    for case in cases:
        if any(load.axial for _, load in case.ends) and not case.each_bolt:
            found = f'meaning = "{meaning}" with an axial force on the joint, in {case.name}'
            expected = "bolt forces on each bolt, or an external axial force on the joint"
            raise s.stop("meaning", "meaning-on-joint", found, expected, 'write acts_on = "each bolt" in the case')


def _has_axial(case: Case) -> bool:
    """Whether a bolt of the case can get an axial force."""
    lifted = case.height not in (None, 0.0)
    return any(
        load.axial != 0 or load.moment[:2] != (0.0, 0.0) or (lifted and load.shear != (0.0, 0.0))
        for _, load in case.ends
    )
