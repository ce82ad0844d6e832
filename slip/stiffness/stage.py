"""The contact stiffness of a finite-element model, from the joint: recommended values, windows, the present value judged, the card."""

from __future__ import annotations

from pathlib import Path

import numpy as np

from slip.assess import Assessment, FaceAssessment, PressedAssessment, assess
from slip.base.errors import InputError, Problems
from slip.base.notes import Note
from slip.base.progress import Progress
from slip.base.records import record
from slip.friction.partial import TYPICAL
from slip.joint.contact import PressedContact, PressedFace
from slip.joint.elements import Elements
from slip.joint.joint import Joint
from slip.stiffness.audit import Audit, audit
from slip.stiffness.card import Card, card
from slip.stiffness.forms import as_per_area
from slip.stiffness.interface import InterfaceValues, interface_values
from slip.stiffness.listing import Form, forms
from slip.stiffness.subject import Subject, constant, of_face, of_joint
from slip.stiffness.upper import Upper, upper_bounds
from slip.stiffness.window import INTERFACE, LEVELS, STICK, Response, Window, response, rigid, sweep, values, window

SERVES = 0.05  # error within which a contact that is meant to stick does so
# Quantities that a sticking contact has to reproduce.
OF_STICK = ("stiffness", "true slip", "energy", "load sharing")
LEAST_ACROSS = 4  # elements across a patch below which a mesh does not see it (practice)


@record(eq=False)
class Penalty:
    """Everything that is said of the contact stiffness of a model.

    subject: the load case that it is judged on; model: by what. interface: values of the real face, None where nothing is known of it.
    windows: against each reference that is asked for. recommended: by purpose, per area [N/mm^3]; forms: of each of these
    values. upper: bounds from above. serves_all: values that keep every quantity within 10 %, by purpose; None where no value
    does. audit: of the present value, None where there is none. card: for the last purpose. rigid: the joint with a contact
    that does not give. notes: warnings of this answer.
    """

    assessment: Assessment | FaceAssessment
    subject: Subject
    model: str
    elements: Elements
    interface: InterfaceValues | None
    windows: tuple[Window, ...]
    recommended: dict[str, float]
    forms: dict[str, tuple[Form, ...]]
    upper: tuple[Upper, ...]
    serves_all: dict[str, tuple[float, float] | None]
    audit: Audit | None
    card: Card
    rigid: Response
    notes: tuple[Note, ...]

    @property
    def joint(self) -> Joint | PressedFace:
        """The joint that the model stands for."""
        return self.assessment.joint


def penalty(joint: Joint | PressedFace | str | Path, progress: Progress | None = None) -> Penalty:
    """Which contact stiffness to enter along the face, within which window, and what the present value does.

    Raises Problems for wrong input and for a file whose contact is not described, NotConverged where the joint cannot be solved.
    """
    found = assess(joint)
    if isinstance(found, PressedAssessment):
        remedy = "slip check FILE has the stiffness of a pressed contact"
        raise Problems([_fault(found.joint, "penalty-contact", "a pressed contact", "plates with a face", remedy)])
    subject = _subject(found)
    elements = subject.joint.elements
    notes = list(_notes(subject, elements))
    own = interface_values(subject)
    k = values(subject)
    swept = sweep(subject, k, progress)
    stuck = rigid(subject)
    windows = [window(STICK, k, swept, stuck)]
    if own is not None:
        windows.append(window(INTERFACE, k, swept, own.own))
    asked = tuple(w for w in windows if elements.purpose in (None, w.purpose)) or tuple(windows[:1])
    recommended = {w.purpose: _recommended(w, own) for w in asked}
    present = _present(subject, elements, notes)
    purpose = asked[-1].purpose
    at = {name: response(subject, constant(value)) for name, value in recommended.items()}
    normal = elements.present_normal or _normal(own)
    return Penalty(
        assessment=found,
        subject=subject,
        model=subject.model(constant(float(k[len(k) // 2]))).name,
        elements=elements,
        interface=own,
        windows=asked,
        recommended=recommended,
        forms={name: forms(subject, elements, value, normal, at[name]) for name, value in recommended.items()},
        upper=upper_bounds(subject, elements, at[purpose], recommended[purpose]),
        serves_all={w.purpose: common(w) for w in asked},
        audit=None if present is None else audit(subject, present, asked, recommended),
        card=card(subject, recommended[purpose], purpose, elements),
        rigid=stuck,
        notes=tuple(notes),
    )


def _subject(found: Assessment | FaceAssessment) -> Subject:
    """What is judged; Problems where the contact cannot be worked out."""
    subject = of_face(found) if isinstance(found, FaceAssessment) else of_joint(found)
    if subject is None:
        expected = "plates with material and thickness, holes, a bearing face, and a case with shear"
        remedy = "add what is missing: slip check FILE says it under partial slip"
        raise Problems([_fault(found.joint, "penalty-not-described", "a face that is not described", expected, remedy)])
    if subject.pressures.peak <= 0:
        remedy = "tighten more, or lower the losses"
        raise Problems([_fault(found.joint, "no-clamp", "no pressure on the face", "a lowest clamp above 0", remedy)])
    return subject


def _fault(
    joint: Joint | PressedContact | PressedFace, code: str, found: str, expected: str, remedy: str
) -> InputError:
    return InputError(code, "", found, expected, remedy, joint.file)


def _recommended(w: Window, own: InterfaceValues | None) -> float:
    """The value per area: of a sticking contact the least that keeps its quantities within 5 %; of the interface its own."""
    if w.purpose == INTERFACE and own is not None:
        return own.typical
    least = [w.lowest[name][SERVES] for name in OF_STICK if not np.isnan(w.errors[name]).all()]
    known = [value for value in least if value is not None]
    return float(w.k[-1]) if len(known) < len(least) or not known else max(known)


def _normal(own: InterfaceValues | None) -> float | None:
    """Normal stiffness per area of a rough face at the clamp-weighted pressure [N/mm^3]; None where it is not known."""
    return None if own is None or own.normal is None else own.normal["weighted"]


def common(w: Window, level: float = LEVELS[0]) -> tuple[float, float] | None:
    """The values that keep every quantity within a level; None where no value does."""
    names = [name for name in w.errors if not np.isnan(w.errors[name]).all()]
    if not names:
        return None
    lows, highs = [w.lowest[name][level] for name in names], [w.highest[name][level] for name in names]
    if any(v is None for v in (*lows, *highs)):
        return None
    low, high = max(v for v in lows if v is not None), min(v for v in highs if v is not None)
    return (low, high) if low <= high else None


def _present(subject: Subject, elements: Elements, notes: list[Note]) -> float | None:
    """The present value per area; a note says why it cannot be told."""
    if elements.present is None:
        return None
    form, value = elements.present
    traction = (elements.friction or subject.friction) * subject.pressures.weighted
    try:
        return float(
            as_per_area(
                form,
                value,
                limit_traction=traction,
                element_size=elements.element_size,
                normal=elements.present_normal,
                order=elements.element_order,
                dimension=elements.dimension,
                width=elements.width,
            )
        )
    except ValueError as error:
        notes.append(
            Note("present-unknown", f"the present value cannot be told per area: {error}", "finite_elements.present")
        )
        return None


def _notes(subject: Subject, elements: Elements) -> list[Note]:
    """Warnings of this answer, before any number."""
    notes = []
    if subject.stiffness is None:
        text = (
            "neither roughness nor a measured stiffness: only the answer for a contact that sticks; measure Ra of both faces, or the "
            "stiffness of the joint with the bodies' part taken out"
        )
        notes.append(Note("interface-unknown", text, "interface.roughness"))
    if subject.reason:
        notes.append(Note("load-reduced", subject.reason, "case"))
    model = subject.model(subject.stiffness or constant(values(subject)[0]))
    notes += [
        Note("model-range", text, "plate") for text in (*model.notes, *([model.outside] if model.outside else []))
    ]
    if elements.element_size is not None:
        across = subject.width / max(elements.element_size)
        if across < LEAST_ACROSS:
            say = subject.joint.system.say
            text = f"{across:.2g} elements across a contact of {say(subject.width, 'length')}: the mesh is too coarse to see where it slips"
            notes.append(Note("mesh-coarse", text, "finite_elements.element_size"))
    if elements.friction is not None and abs(elements.friction - subject.friction) > 1e-9:
        text = f"the model's friction {elements.friction:g} is not the {subject.friction:g} that the verdict rests on"
        notes.append(Note("model-friction", text, "finite_elements.friction"))
    return notes


def physical(found: Penalty) -> float | None:
    """The face's own typical value per area at the clamp-weighted pressure."""
    return None if found.interface is None else found.interface.k_t["weighted"][TYPICAL]
