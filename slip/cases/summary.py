"""What is told of all cases together: counts, the cases nearest to slip, the envelope of every bolt, how the reserves spread."""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.records import record
from slip.cases.candidates import ENDS
from slip.cases.form import Form
from slip.cases.judge import Judged, largest
from slip.cases.result import known_bolts
from slip.cases.rows import Block, Read
from slip.clamp.stage import Highest
from slip.joint.joint import Joint
from slip.verdict.stage import FAILS, HOLDS, NOT_SOLVED

Array = np.ndarray
KEPT = 1000  # cases nearest to slip that are remembered by name
LISTED = 100  # cases that could not be judged, and reasons of refusal, that are remembered
BINS = (0.5, 0.8, 1.0, 1.05, 1.1, 1.25, 1.5, 2.0, 3.0, 5.0)  # edges of the reserve factor's spread
NEAR = 1.25  # reserve against separation below which a case counts as near
# Of each bolt: what is told, and whether its smallest or largest value over all cases.
ENVELOPE = {"clamp_low": min, "clamp_high": max, "shear": max, "safety": min, "load_factor": min, "reserve": min}


@record
class Worst:
    """What governs one case: check, end, bolt ('' where it speaks of none), factor and reserve (None where there is none)."""

    case: str
    code: int
    check: str
    end: str
    bolt: str
    factor: float | None
    required: float
    reserve: float | None


class Summary:
    """Adds up chunk by chunk; two of them add up to the one of all their cases. All of it is plain numbers and texts."""

    def __init__(self, bolts: tuple[str, ...]) -> None:
        self.bolts = bolts
        self.rows = self.refused = 0
        self.codes = {HOLDS: 0, FAILS: 0, NOT_SOLVED: 0}
        self.worst: list[Worst] = []
        self.asked: list[Worst] = []
        self.not_judged: list[tuple[str, str]] = []
        self.reasons: dict[str, int] = {}
        self.spread = [0] * (len(BINS) + 1)
        self.near: list[tuple[float, str, str]] = []
        self.near_count = 0
        self.open_cases = 0
        self.envelope: dict[str, list[tuple[float, str]]] = {
            name: [(np.inf if least is min else -np.inf, "")] * len(bolts) for name, least in ENVELOPE.items()
        }
        self.highest = Highest(None, None)
        self.axial = [0.0, 0.0, 0.0]  # number, sum and sum of squares of the typed axial forces
        self.balance: tuple[float, str] = (0.0, "")
        self.balanced = 0

    @property
    def cases(self) -> int:
        """Number of cases."""
        return sum(self.codes.values())

    @property
    def code(self) -> int:
        """Exit code: a case fails, else one could not be judged, else all hold."""
        if self.codes[FAILS]:
            return FAILS
        return NOT_SOLVED if self.codes[NOT_SOLVED] or self.refused or not self.cases else HOLDS

    def add(self, other: Summary) -> None:
        """Take in what another has, whose cases come later in the table."""
        self.rows += other.rows
        self.refused += other.refused
        self.codes = {code: count + other.codes[code] for code, count in self.codes.items()}
        self.worst = nearest_first([*self.worst, *other.worst])
        self.asked = nearest_first([*self.asked, *other.asked])
        self.not_judged = [*self.not_judged, *other.not_judged][:LISTED]
        for reason, count in other.reasons.items():
            if reason in self.reasons or len(self.reasons) < LISTED:
                self.reasons[reason] = self.reasons.get(reason, 0) + count
        self.spread = [a + b for a, b in zip(self.spread, other.spread, strict=True)]
        self.near = sorted([*self.near, *other.near], key=lambda item: item[0])[:LISTED]
        self.near_count += other.near_count
        self.open_cases += other.open_cases
        for name, least in ENVELOPE.items():
            pairs = zip(self.envelope[name], other.envelope[name], strict=True)
            self.envelope[name] = [least(a, b, key=lambda item: item[0]) for a, b in pairs]
        self.highest = largest([self.highest, other.highest])
        self.axial = [a + b for a, b in zip(self.axial, other.axial, strict=True)]
        self.balance = max(self.balance, other.balance, key=lambda item: item[0])
        self.balanced += other.balanced

    def as_dict(self) -> dict[str, Any]:
        """As plain lists, for a file from which a run goes on."""
        found = dict(self.__dict__)
        for name in ("worst", "asked"):
            found[name] = [[getattr(w, field) for field in Worst.__dataclass_fields__] for w in found[name]]
        found["highest"] = [self.highest.yield_use, self.highest.bearing_pressure]
        found["codes"] = [[code, count] for code, count in self.codes.items()]
        return found

    @classmethod
    def from_dict(cls, found: dict[str, Any]) -> Summary:
        """The summary that `as_dict` wrote."""
        made = cls(tuple(found["bolts"]))
        made.__dict__.update(found)
        made.bolts = tuple(found["bolts"])
        made.worst, made.asked = ([Worst(*values) for values in found[name]] for name in ("worst", "asked"))
        made.highest = Highest(*found["highest"])
        made.codes = {int(code): count for code, count in found["codes"]}
        made.not_judged = [(case, reason) for case, reason in found["not_judged"]]
        made.near = [(value, case, bolt) for value, case, bolt in found["near"]]
        made.envelope = {name: [(v, case) for v, case in items] for name, items in found["envelope"].items()}
        made.balance = tuple(found["balance"])
        return made


def nearest_first(worst: list[Worst]) -> list[Worst]:
    """Failing cases first, then by the reserve; as many as are kept. Cases that could not be judged are told apart."""
    return sorted(worst, key=lambda w: (w.code != FAILS, np.inf if w.reserve is None else w.reserve))[:KEPT]


def summed(joint: Joint, form: Form, read: Read, judged: Judged, asked: tuple[str, ...] = ()) -> Summary:
    """The summary of one chunk; cases that are asked for are kept however far from slip they are."""
    block, names = read.block, read.block.names
    made = Summary(joint.pattern.names)
    made.rows, made.refused, made.highest = read.count, read.refused.height, judged.highest
    for code in made.codes:
        made.codes[code] = int((judged.code == code).sum())
    fails = judged.code == FAILS
    order = np.lexsort((np.where(np.isnan(judged.reserve), np.inf, judged.reserve), ~fails))[: KEPT + 1]
    made.worst = _governing(joint, block, judged, order)
    if asked:
        made.asked = _governing(joint, block, judged, np.flatnonzero(names.is_in(list(asked)).to_numpy()))
    open_cases = np.flatnonzero(judged.reason != "")
    made.not_judged = [(names[int(i)], str(judged.reason[i])) for i in open_cases[:LISTED]]
    for reason in read.refused["reason"].to_list():
        kind = reason.partition(": ")[0].partition(' "')[0]
        made.reasons[kind] = made.reasons.get(kind, 0) + 1
    judgeable = judged.reason == ""
    reserve = judged.reserve[judgeable & ~np.isnan(judged.reserve)]
    made.spread = np.bincount(np.searchsorted(BINS, reserve, side="right"), minlength=len(BINS) + 1).tolist()
    known = known_bolts(block, judged, joint.pattern.count)
    _separation(made, joint, block, judged, known)
    _envelope(made, names, judged, known)
    if "Fax" in block.given:
        typed = block.given["Fax"][block.present]
        made.axial = [float(typed.size), float(typed.sum()), float((typed**2).sum())]
    return made


def _governing(joint: Joint, block: Block, judged: Judged, places: Array) -> list[Worst]:
    """What governs each of the cases at these places, those that were judged."""
    found = []
    for i in places[judged.reason[places] == ""]:
        bolt, factor = int(judged.bolt[i]), float(judged.factor[i])
        found.append(
            Worst(
                case=block.names[int(i)],
                code=int(judged.code[i]),
                check=str(judged.check[i]),
                end=ENDS[int(judged.end[i])],
                bolt=joint.pattern.names[bolt] if bolt >= 0 else "",
                factor=None if np.isnan(factor) else factor,
                required=float(judged.required[i]),
                reserve=None if np.isnan(judged.reserve[i]) else float(judged.reserve[i]),
            )
        )
    return found[:KEPT]


def _separation(made: Summary, joint: Joint, block: Block, judged: Judged, known: Array) -> None:
    """Cases that are near to opening, and those with an open bolt."""
    apart = np.where(known, judged.separation / judged.required[:, None], np.inf)
    least = apart.min(axis=1)
    near = np.flatnonzero(least < NEAR)
    made.near_count = len(near)
    made.open_cases = int((judged.open & known).any(axis=1).sum())
    for i in near[np.argsort(least[near], kind="stable")][:LISTED]:
        made.near.append((float(least[i]), block.names[int(i)], joint.pattern.names[int(apart[i].argmin())]))


def _envelope(made: Summary, names: Any, judged: Judged, known: Array) -> None:
    """Smallest or largest value of each bolt with the case it comes from."""
    if not len(names):
        return
    for name, least in ENVELOPE.items():
        values = getattr(judged, name if name in ("clamp_low", "clamp_high", "shear") else f"bolt_{name}")
        away = np.inf if least is min else -np.inf
        values = np.where(known, values, away)
        at = values.argmin(axis=0) if least is min else values.argmax(axis=0)
        made.envelope[name] = [
            (float(values[i, b]), names[int(i)] if np.isfinite(values[i, b]) else "") for b, i in enumerate(at)
        ]
