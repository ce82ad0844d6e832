"""What the contact stiffness in use does to the results of a model: which motion it makes, which error each quantity carries."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.stiffness.subject import Subject, constant
from slip.stiffness.window import Response, Window, error, response

ROUNDING = 1e-9  # a true slip below this part of the motion is none
LARGE = 0.10  # an error that is worth a word


@record(eq=False)
class Audit:
    """The present value per area [N/mm^3], what the joint does with it, its error of each quantity by purpose (NaN for none), and what
    to change, in sentences."""

    k: float
    response: Response
    errors: dict[str, dict[str, float]]
    advice: tuple[str, ...]


def audit(subject: Subject, k: float, windows: tuple[Window, ...], recommended: dict[str, float]) -> Audit:
    """The present value judged against every reference.

    recommended: by purpose [N/mm^3]. Raises NotConverged or SlipsWholly where the joint cannot be solved with the value.
    """
    found = response(subject, constant(k))
    errors = {w.purpose: {name: error(found, w.reference, name) for name in w.errors} for w in windows}
    return Audit(k, found, errors, tuple(_advice(subject, k, found, errors, recommended)))


def _advice(
    subject: Subject, k: float, found: Response, errors: dict[str, dict[str, float]], recommended: dict[str, float]
) -> list[str]:
    """What to change, and why."""
    m, system = found.motions, subject.joint.system

    def say(value: float, kind: str) -> str:
        return f"{system.out(value, kind):.4g} {system.unit(kind)}"

    motion = m.elastic_slip + m.true_slip
    true = m.true_slip if m.true_slip > ROUNDING * motion else 0.0
    said = [
        f"of {say(motion, 'length')} of motion in the contact {say(m.elastic_slip, 'length')} comes back "
        f"and {say(true, 'length')} is true slip"
    ]
    for purpose, value in recommended.items():
        wrong = {name: e for name, e in errors.get(purpose, {}).items() if not np.isnan(e) and e > LARGE}
        if not wrong:
            said.append(f"for {purpose}: every quantity is within {LARGE:.0%}; leave the value")
            continue
        worst = max(wrong, key=lambda name: wrong[name])
        way = "raise" if k < value else "lower"
        shown = f"{wrong[worst]:.0%}" if wrong[worst] < 10 else f"a factor of {wrong[worst]:.3g}"
        said.append(
            f"for {purpose}: {worst} is off by {shown}; {way} the stiffness to {say(value, 'stiffness per area')}, "
            f"{value / k:.3g} times the present one"
        )
    return said
