"""Builders of the preload and what it loses: tightening, losses."""

from __future__ import annotations

import numpy as np

from slip.joint.bolt import Bolt
from slip.joint.pattern import Pattern
from slip.joint.plates import Plate
from slip.joint.tightening import Losses, Preload, Rises, Scatter, Torque
from slip.read import library
from slip.read.bolt_list import BoltList
from slip.read.forms import PreloadForm
from slip.read.hardware import need_springs, steel
from slip.read.reader import Reader, Stop, nearest
from slip.read.sections import Section


def tightening(r: Reader, s: Section, bolts: BoltList | None, bolt: Bolt | None) -> Torque | Preload:
    if bolts is None:
        raise Stop
    if bolts.preload_low is not None:
        if s.has("preload") or s.has("torque"):
            key = "preload" if s.has("preload") else "torque"
            raise s.stop(
                key,
                "too-many-forms",
                f"{key} and preloads in the bolt list",
                "one statement of the preload",
                "keep one",
            )
        assert bolts.preload_high is not None
        return Preload(bolts.preload_low, bolts.preload_high, None, None)
    if s.has("torque") and s.has("preload"):
        raise s.stop("preload", "too-many-forms", "torque and preload", "exactly one of them", "remove one")
    if not s.has("torque") and not s.has("preload"):
        expected = "exactly one of torque, preload"
        raise s.stop(
            "torque",
            "missing-key",
            "neither torque nor preload",
            expected,
            'add torque = "200 N m" or preload = [low, high]',
        )
    if s.has("preload"):
        return _preload(r, s, bolts.pattern)
    return _torque(r, s, bolt)


def _preload(r: Reader, s: Section, pattern: Pattern) -> Preload:
    form: PreloadForm = s.get("preload")
    scatter = _scatter(r, s)
    if form.nominal is not None:
        if scatter is None and s.get("tool_accuracy") is not None:
            scatter = Scatter(s.get("tool_accuracy"), "tool accuracy", "file", "given", True)
        if scatter is None:
            expected = "[lowest, highest], or a nominal with scatter or method"
            raise s.stop_value("preload", "preload-without-scatter", expected, 'add scatter = "25 %" or write a range')
        ones = np.ones(pattern.count)
        return Preload(
            form.nominal * (1 - scatter.bound) * ones,
            form.nominal * (1 + scatter.bound) * ones,
            form.nominal * ones,
            scatter,
        )
    if scatter is not None:
        raise s.stop("preload", "too-many-forms", "a preload range and a scatter", "one of them", "remove the scatter")
    unknown = [name for name in form.ranges if name and name not in pattern.names]
    if unknown:
        close = nearest(unknown[0], pattern.names)
        remedy = f"did you mean {close}?" if close else f"the bolts are {', '.join(pattern.names[:8])}"
        raise s.stop("preload", "unknown-bolt", unknown[0], "names of the pattern", remedy)
    missing = [name for name in pattern.names if name not in form.ranges and "" not in form.ranges]
    if missing:
        raise s.stop(
            "preload",
            "bolt-without-preload",
            ", ".join(missing[:8]),
            "a preload for every bolt",
            "add others = [low, high]",
        )
    ranges = np.array([form.ranges.get(name, form.ranges.get("", (0.0, 0.0))) for name in pattern.names])
    return Preload(ranges[:, 0], ranges[:, 1], None, None)


def _torque(r: Reader, s: Section, bolt: Bolt | None) -> Torque:
    if bolt is None:
        raise Stop
    if bolt.thread is None:
        raise r.stop(
            ("bolt", "thread"),
            "missing-key",
            "nothing",
            "thread, to turn torque into preload",
            'add thread = "M16" in [bolt]',
        )
    thread, head, factor = (ranged(s, name) for name in ("thread_friction", "head_friction", "nut_factor"))
    if factor and (thread or head):
        raise s.stop("nut_factor", "too-many-forms", "nut_factor and frictions", "one of them", "remove one")
    if not factor and not (thread and head):
        missing = "head_friction" if thread else "thread_friction"
        expected = "thread_friction and head_friction, or nut_factor"
        raise s.stop(missing, "missing-key", "nothing", expected, f"add {missing} = [low, high]")
    if not factor and (bolt.bearing_diameter is None or bolt.hole_diameter is None):
        what = "bearing_diameter" if bolt.bearing_diameter is None else "hole_diameter"
        raise r.stop(
            ("bolt", what),
            "missing-key",
            "nothing in file or table",
            f"{what}, for the friction under the head",
            f"add {what}",
        )
    accuracy, scatter = s.get("tool_accuracy"), _scatter(r, s)
    if accuracy is not None and scatter is not None:
        raise s.stop("tool_accuracy", "too-many-forms", "tool_accuracy and a scatter", "one of them", "keep one")
    if accuracy is None and scatter is None:
        scatter = library.worst_scatter()
        text = f"tightening scatter {scatter.bound:.0%}, the table's largest ({scatter.text})"
        r.assume("scatter-worst", text, "tightening.method")
    torque, prevailing = s.get("torque"), ranged(s, "prevailing_torque") or (0.0, 0.0)
    if prevailing[1] >= torque:
        expected = f"a prevailing torque below the tightening torque of {r.system.say(torque, 'moment')}"
        raise s.stop_value("prevailing_torque", "prevailing-above-torque", expected, "correct one of them")
    return Torque(torque, thread, head, factor, prevailing, scatter, accuracy)


def _scatter(r: Reader, s: Section) -> Scatter | None:
    """The scatter that the file gives in one of its forms, or None."""
    given = [name for name in ("method", "scatter", "scatter_ratio", "scatter_sigma") if s.has(name)]
    if len(given) > 1:
        raise s.stop(given[1], "too-many-forms", " and ".join(given), "one statement of the scatter", "keep one")
    if s.has("sigmas") != s.has("scatter_sigma"):
        missing = "scatter_sigma" if s.has("sigmas") else "sigmas"
        raise s.stop(missing, "missing-key", "nothing", "scatter_sigma together with sigmas", f"add {missing}")
    if not given:
        return None
    form, value = given[0], s.get(given[0])
    if form == "method":
        found = library.scatter(value)
        if found is None:
            close = nearest(value, library.choices("tightening", "method"))
            remedy = f'did you mean "{close}"?' if close else "slip tables tightening lists them"
            raise s.stop_value("method", "unknown-method", "a tightening method of the table", remedy)
        return found
    bounds = {
        "scatter": lambda: value,
        "scatter_ratio": lambda: (value - 1) / (value + 1),
        "scatter_sigma": lambda: value * s.get("sigmas"),
    }
    bound = bounds[form]()
    if not 0 <= bound < 1:
        raise s.stop_value(form, "scatter-too-wide", "a bound below 100 %", "correct the scatter")
    return Scatter(bound, form, "file", "given", True)


def ranged(s: Section, name: str) -> tuple[float, float] | None:
    value = s.get(name)
    return (float(value[0]), float(value[1])) if value is not None else None


def losses(r: Reader, s: Section, plates: tuple[Plate, ...] | None, bolt: Bolt | None) -> Losses:
    if not s.has("embedding"):
        r.assume("embedding-table", "embedding by the table", "losses.embedding")
    if not s.has("relaxation"):
        r.assume("relaxation-5", "relaxation 5 % of the preload", "losses.relaxation")
    kind, size = s.get("embedding", ("auto", 0.0))
    if kind != "force" and plates is not None and bolt is not None:
        need_springs(r, plates, bolt, "embedding", 'write embedding = 0 or a force such as "4500 N"')
    thermal = s.get("thermal")
    if isinstance(thermal, Rises) and plates is not None and bolt is not None:
        thermal = _rises(r, s, thermal, plates, bolt)
    return Losses(
        embedding_force=size if kind == "force" else None,
        embedding_length=size if kind == "length" else None,
        relaxation=s.get("relaxation", 0.05),
        thermal=thermal,
        washer_material=bolt.material if bolt is not None else steel(),
    )


def _rises(r: Reader, s: Section, rises: Rises, plates: tuple[Plate, ...], bolt: Bolt) -> Rises:
    need_springs(r, plates, bolt, "thermal", 'write thermal as a loss such as "3000 N"')
    without = [p.name for p in plates if p.material is not None and p.material.expansion is None]
    if bolt.material.expansion is None:
        without.append("bolt")
    if without:
        raise s.stop(
            "thermal",
            "missing-key",
            f"no expansion for {', '.join(without)}",
            "the expansion of every part",
            "add expansion to the material",
        )
    if len(rises.plates) not in (1, len(plates)):
        raise s.stop_value(
            "thermal", "wrong-count", f"one rise for all plates, or {len(plates)}", "give one for each plate"
        )
    return rises if len(rises.plates) == len(plates) else Rises(rises.bolt, rises.plates * len(plates))
