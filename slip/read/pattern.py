"""Builder of the bolt pattern, in any of its forms."""

from __future__ import annotations

import numpy as np

from slip.joint.pattern import Pattern
from slip.read.bolt_list import BoltList, read_bolt_list
from slip.read.layout import MOST_BOLTS
from slip.read.reader import Reader, Stop, show
from slip.read.sections import Section

FORMS = ("positions", "grid", "circle", "file")
CLOSEST = 1e-6  # mm; bolts nearer than this are the same bolt


def pattern(r: Reader, s: Section) -> BoltList:
    """The bolts of [pattern]; one bolt at the origin when the file is silent."""
    given = [name for name in FORMS if s.has(name)]
    if len(given) > 1:
        raise s.stop(given[1], "too-many-forms", " and ".join(given), f"one of {', '.join(FORMS)}", "keep one")
    if not given and s.has("names"):
        raise s.stop(
            "positions", "missing-key", "names alone", "positions with the names", "add positions = [[x, y], ..]"
        )
    if not given:
        r.assume("one-bolt", "one bolt, at the origin", "pattern.positions")
        return BoltList(Pattern(("B1",), np.zeros((1, 2))), None, None, (), "")
    if given == ["file"] and s.has("names"):
        raise s.stop("names", "too-many-forms", "file and names", "the names in the file", "remove names")
    bolts = read_bolt_list(r, s) if given == ["file"] else _typed(r, s, given[0])
    _check(r, s, bolts)
    return bolts


def _typed(r: Reader, s: Section, form: str) -> BoltList:
    """The bolts that the joint file itself places."""
    names, points = s.get("names"), s.get(form)
    if names is None:
        names = tuple(f"B{i + 1}" for i in range(len(points)))
    if len(names) != len(points):
        expected = f"{len(points)} names, one for each bolt"
        raise s.stop("names", "wrong-count", f"a list of {len(names)}", expected, "name each bolt")

    own = form == "positions"  # each bolt has a place of its own
    places = tuple(r.place((*s.path, form, i) if own else (*s.path, form)) for i in range(len(points)))
    return BoltList(Pattern(names, np.array(points, dtype=float)), None, None, places, "")


def _check(r: Reader, s: Section, bolts: BoltList) -> None:
    """Not too many bolts, all of different names and at different points."""
    names, points = bolts.pattern.names, bolts.pattern.positions
    if len(names) > MOST_BOLTS:
        key = next(form for form in FORMS if s.has(form))
        raise s.stop(key, "too-many-bolts", f"{len(names)} bolts", f"at most {MOST_BOLTS}", "split the joint")
    count = len(r.errors)
    for i, name in enumerate(names):
        before = np.linalg.norm(points[:i] - points[i], axis=1) < CLOSEST
        if name in names[:i]:
            r.fail_at(bolts.places[i], "bolt-twice", f"a second bolt {show(name)}", "different names", "rename one")
        elif before.any():
            found = f"{name} at the same point as {names[int(np.argmax(before))]}"
            r.fail_at(bolts.places[i], "bolts-coincide", found, "one bolt at each point", "remove or move one")
    if len(r.errors) > count:
        raise Stop
