"""Many cases judged at once: the stages of a joint on arrays, and what its verdict would say of each case."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from slip.base.errors import NotConverged
from slip.base.records import record
from slip.base.trace import Trace
from slip.cases.acting import acting, part
from slip.cases.candidates import Candidate, candidate, extras, first_least, governing
from slip.cases.rows import Block
from slip.clamp.assembly import Assembly, assemble
from slip.clamp.stage import Clamp, Highest, highest, ledger, refuse_impossible
from slip.clamp.states import not_carried, shared
from slip.friction.stage import Slip, slip
from slip.joint.joint import Joint
from slip.pressure.stage import Pressure, pressure
from slip.verdict.checks import TIE
from slip.verdict.gross_slip import deciding
from slip.verdict.stage import not_solved

Array = np.ndarray
NOT_PROVEN = "the group factor could not be proven"
OVER = "preload_low is above the highest preload of the joint file"
TILTED = "a tilting moment that the pattern cannot carry"


@record(eq=False)
class Judged:
    """What C cases over n bolts came to, each value at its governing end.

    bolt_* (C, n), group_* and force_* (C,): end (0 given, 1 other), safety, load_factor, reserve; clamp_low, clamp_high, shear,
    separation, open (C, n). required (C,). code (C,): holds, fails or not solved, as the exit codes; check, end, bolt, factor,
    reserve (C,): what governs each case. reason (C,): why it could not be judged, ''. highest: of all.
    """

    bolt_end: Array
    bolt_safety: Array
    bolt_load_factor: Array
    bolt_reserve: Array
    clamp_low: Array
    clamp_high: Array
    shear: Array
    separation: Array
    open: Array
    group_end: Array
    group_safety: Array
    group_load_factor: Array
    group_reserve: Array
    force_end: Array
    force_safety: Array
    force_load_factor: Array
    force_reserve: Array
    required: Array
    code: Array
    check: Array
    end: Array
    bolt: Array
    factor: Array
    reserve: Array
    reason: Array
    highest: Highest


@record(eq=False)
class Prepared:
    """What all chunks of a table have in common: the joint, its bolts before load, the pressure on its face without and with torque."""

    joint: Joint
    assembly: Assembly
    still: Pressure
    turning: Pressure


def prepare(joint: Joint) -> Prepared:
    """The joint as far as it can be worked out before any load. Raises Problems for a preload that no bolt can carry."""
    assembly = assemble(joint)
    refuse_impossible(joint, assembly)
    single = joint.pattern.count == 1
    still = pressure(joint, turning=False)
    return Prepared(joint, assembly, still, pressure(joint, turning=True) if single else still)


def judge(ready: Prepared, block: Block, bolts: bool) -> Judged:
    """The verdict on every case of a block, as one joint file with that case would have it.

    A case that cannot be solved does not take the others with it: its `reason` says why.
    """
    parts = _parts(ready.joint, block, bolts)
    solved = [(cases, _solved(ready, turning, part(block, cases), bolts)) for cases, turning in parts]
    return solved[0][1] if len(solved) == 1 else _joined(solved)


def _parts(joint: Joint, block: Block, bolts: bool) -> list[tuple[Array, bool]]:
    """Cases that the stages take together: with one bolt those under torque apart from the others."""
    every = np.arange(block.count)
    if joint.pattern.count > 1:
        return [(every, False)]
    what = acting(joint, block, bolts)
    turned = np.zeros(block.count, dtype=bool)
    turned[what.case[what.couple[2, :, 0] != 0]] = True
    return [(cases, turning) for cases, turning in ((every[~turned], False), (every[turned], True)) if cases.size] or [
        (every, False)
    ]


def _solved(ready: Prepared, turning: bool, block: Block, bolts: bool) -> Judged:
    """As `judge`; where the answer of the whole cannot be proven, of its halves."""
    try:
        return _judged(ready, turning, block, bolts)
    except NotConverged:
        if block.count == 1:
            block.open_reason[0] = NOT_PROVEN
            zero = {name: np.zeros_like(values) for name, values in block.given.items()}
            none = {name: values[:0] for name, values in block.other.items()}
            return _judged(ready, False, replace(block, given=zero, other=none, second=block.second[:0]), bolts)
        halves = np.array_split(np.arange(block.count), 2)
        return _joined([(half, _solved(ready, turning, part(block, half), bolts)) for half in halves])


def _joined(parts: list[tuple[Array, Judged]]) -> Judged:
    """One record of several, its cases at the places that come with each."""
    order = np.argsort(np.concatenate([cases for cases, _ in parts]), kind="stable")
    values = {
        name: np.concatenate([getattr(judged, name) for _, judged in parts])[order]
        for name in Judged.__dataclass_fields__
        if name != "highest"
    }
    return Judged(**values, highest=largest([judged.highest for _, judged in parts]))


def largest(many: list[Highest]) -> Highest:
    """The largest of several highest values."""

    def most(values: list[float | None]) -> float | None:
        return max((v for v in values if v is not None), default=None)

    return Highest(most([h.yield_use for h in many]), most([h.bearing_pressure for h in many]))


def _judged(ready: Prepared, turning: bool, block: Block, bolts: bool) -> Judged:
    joint, pressed = ready.joint, ready.turning if turning else ready.still
    what = acting(joint, block, bolts)
    tilted = np.unique(what.case[not_carried(joint, what)])
    block.open_reason[tilted] = TILTED
    if what.preload_low is not None:
        over = (what.preload_low > ready.assembly.high * (1 + 1e-9)).any(axis=1)
        block.open_reason[np.unique(what.case[over])] = OVER
    states = shared(joint, what, Trace(keep=False))
    found = ledger(joint, ready.assembly, states, [], keep=False)
    slipping = slip(joint, states, found, pressed, keep=False)
    return _Verdict(joint, Clamp(ready.assembly, states, found, (), ()), slipping, pressed, block).judged()


class _Verdict:
    """The verdict of a joint on arrays: ends first, (2, C, ...); what a case has no other end for is infinite there."""

    def __init__(self, joint: Joint, clamp: Clamp, slipping: Slip, pressure: Pressure, block: Block) -> None:
        self.joint, self.clamp, self.slip, self.pressure, self.block = joint, clamp, slipping, pressure, block
        self.C = block.count
        self.at = np.stack([np.arange(self.C), -np.ones(self.C, dtype=int)])
        self.at[1, clamp.states.case[self.C :]] = np.arange(self.C, len(clamp.states.case))
        required = joint.required
        self.least = np.where(block.alternating, required.alternating, required.static)

    def ends(self, values: Array, absent: float | bool = np.inf) -> Array:
        """Values (S, ...) of the states by end and case, (2, C, ...)."""
        found = values[self.at]
        found[1, self.at[1] < 0] = absent
        return found

    def judged(self) -> Judged:
        """Everything that is told of the cases."""
        ledger, slipping = self.clamp.ledger, self.slip
        sliding = slipping.sliding
        bolt = [np.where(sliding[:, None], v, np.inf) for v in (slipping.bolt_safety, slipping.bolt_load_factor)]
        group = [np.where(sliding, v, np.inf) for v in (slipping.group.factor, slipping.group_load_factor)]
        force = [np.where(sliding, v, np.inf) for v in (slipping.force_safety, slipping.force_load_factor)]
        apart = np.where(ledger.open & ~(ledger.relief > 0), 0.0, ledger.separation_factor)
        of_bolts, of_group, of_force = (self._by_end(*pair) for pair in (bolt, group, force))
        decided = self._decided(of_bolts, of_group, self.ends(apart))
        picked = of_bolts["end"]
        values = {
            name: _pick(self.ends(v), picked)
            for name, v in (
                ("clamp_low", ledger.clamp_low),
                ("clamp_high", ledger.clamp_high),
                ("shear", slipping.shear),
                ("separation", apart),
                ("open", ledger.open),
            )
        }
        named = {
            f"{what}_{name}": found[name]
            for what, found in (("bolt", of_bolts), ("group", of_group), ("force", of_force))
            for name in ("end", "safety", "load_factor", "reserve")
        }
        return Judged(
            **values, **named, **decided, required=self.least, reason=self.block.open_reason, highest=self._highest()
        )

    def _highest(self) -> Highest:
        return highest(self.clamp.ledger) if self.C else Highest(None, None)

    def _by_end(self, safety: Array, growing: Array) -> dict[str, Array]:
        """Both factors, and the reserve of the one that counts, at the end where that is smaller; the given end of equal ones."""
        factor = self.ends(deciding(self.joint, safety, growing))
        least = self.least.reshape((self.C,) + (1,) * (factor.ndim - 2))
        reserve = factor / least
        end = np.where(_tied_first(reserve[0], reserve[1]), 0, 1)
        both = {"safety": self.ends(safety), "load_factor": self.ends(growing), "reserve": reserve}
        return {name: _pick(values, end) for name, values in both.items()} | {
            "end": end,
            "reserves": reserve,
            "factors": factor,
        }

    def _decided(self, of_bolts: dict[str, Array], of_group: dict[str, Array], apart: Array) -> dict[str, Array]:
        """Code, and what governs, of every case: checks in the order of a joint's verdict."""
        candidates: list[Candidate] = []
        none, nan = np.full(self.C, -1), np.full(self.C, np.nan)
        extra = extras(self.joint, self.clamp, self.pressure, self.slip, self.block, self.at)
        for end in (0, 1):
            if self.joint.required.decides == "per bolt":
                reserve, factor = of_bolts["reserves"][end], of_bolts["factors"][end]
                bolt = first_least(reserve)
                candidates.append(candidate("gross_slip.per_bolt", end, bolt, _of(factor, bolt), _of(reserve, bolt)))
            else:
                reserve, factor = of_group["reserves"][end], of_group["factors"][end]
                candidates.append(candidate("gross_slip.group", end, none, factor, reserve))
            bolt = first_least(apart[end])
            factor = _of(apart[end], bolt)
            candidates += [candidate("separation", end, bolt, factor, factor / self.least), *extra[end]]
        never = np.zeros(self.C, dtype=bool)
        candidates += [Candidate(c.check, 0, none, nan, nan, never, never) for c in not_solved(self.joint)]
        return governing(candidates, self.block.open_reason != "")


def _of(values: Array, bolt: Array) -> Array:
    """Of values (C, n) that of the bolt of each case."""
    return np.take_along_axis(values, bolt[:, None], 1)[:, 0]


def _tied_first(first: Array, second: Array) -> Array:
    """Whether the first of two counts as the smaller: smaller, equal within 1e-9, or not a number."""
    least = np.fmin(first, second)
    with np.errstate(invalid="ignore"):
        return np.where(
            np.isnan(first), True, np.where(np.isnan(second), False, ~(first > least + TIE * np.abs(least)))
        )


def _pick(values: Array, end: Array) -> Array:
    """Of values (2, C, ...) the one at the end of each."""
    return np.where(end == 0, values[0], values[1])
