"""The one table of joint-file keys: the checks, `slip new` and docs/input.md all come from it.

A key's `kind` is a kind of quantity of base.units, a plain kind (text, choice, flag, whole, number, friction, share) or a form with a
reader of its own in read.forms. `shape` is one, range (two), one or range, or a count of components.
"""

from __future__ import annotations

from math import inf

from slip.base.records import record

# What lies beyond is mistyped: a part below a micrometre; a face softer than foam a hand thick, stiffer than steel an atom thick.
LEAST_LENGTH = 1e-3  # mm
LEAST_PER_AREA, MOST_PER_AREA = 1e-3, 1e12  # N/mm^3


@record
class Key:
    """One key of the joint file. Limits are in inside units; `above` excludes the limit itself. `later`: checked, not used yet."""

    table: str
    name: str
    kind: str
    help: str
    shape: str = "one"
    least: float = -inf
    most: float = inf
    above: bool = False
    choices: tuple[str, ...] = ()
    default: str = ""
    needed_for: str = ""
    later: bool = False

    @property
    def path(self) -> str:
        """Dotted path as shown to a person."""
        return f"{self.table}.{self.name}" if self.table else self.name


def _length(table: str, name: str, help: str, **more: object) -> Key:
    """A dimension of a part."""
    return Key(table, name, "length", help, least=LEAST_LENGTH, **more)  # type: ignore[arg-type]


def positive(kind: str, name: str = "") -> Key:
    """A value above zero that stands inside another value; a stiffness per area within its limits."""
    if kind == "stiffness per area":
        return Key("", name, kind, "", least=LEAST_PER_AREA, most=MOST_PER_AREA)
    return Key("", name, kind, "", least=0.0, above=True)


def not_negative(kind: str) -> Key:
    """A value of zero or more that stands inside another value."""
    return Key("", "", kind, "", least=0.0)


# Tables in file order, with a line each; a name with [] is an array of tables.
TABLES: dict[str, str] = {
    "": "the file as a whole",
    "bolt": "one bolt of the pattern; all are alike",
    "bolt.segment[]": "pieces of the bolt inside the grip, from the head",
    "tightening": "how the preload is made: exactly one of torque, preload",
    "losses": "what the preload loses after assembly",
    "plate[]": "the clamped plates, from the bolt head down",
    "interface": "the sliding face",
    "pattern": "where the bolts stand: positions, grid, circle or file; without it one bolt at the origin",
    "axial": "what an axial force is, and who carries it",
    "required": "what the result must reach",
    "standard[]": "standards that must be met as well, beside the result from first principles",
    "case[]": "load cases",
    "contact": "a pressed contact instead of bolts",
    "body[]": "the two bodies of a pressed contact",
    "finite_elements": "the contact settings of a finite-element model, to be judged",
    "fretting": "what judges wear and cracks",
    "loosening": "what judges self-loosening",
    "scatter": "distributions and correlation of the inputs",
    "table": "how a table of many load cases is read",
}

SLIP, CLAMP, BOLT, PARTIAL = "slip", "clamp from torque", "bolt load", "partial slip"

KEYS: tuple[Key, ...] = (
    Key("", "format", "whole", "version of this file format", least=1, most=1, needed_for="every answer"),
    Key("", "title", "text", "what the joint is"),
    Key("", "units", "choice", "system of bare numbers", choices=("N mm", "lbf in"), needed_for="bare numbers"),
    # bolt
    Key("bolt", "thread", "thread", 'ISO metric "M16", "M16x1.5"; unified "3/4-10 UNC"', needed_for=CLAMP),
    Key("bolt", "grade", "text", 'class "8.8" or grade "A325"; see slip tables grades', needed_for=BOLT),
    Key("bolt", "yield_strength", "pressure", "in place of the grade's", least=0, above=True, needed_for=BOLT),
    Key("bolt", "tensile_strength", "pressure", "in place of the grade's", least=0, above=True, needed_for="standards"),
    Key(
        "bolt",
        "head",
        "choice",
        "sets bearing_diameter unless that is given",
        choices=("hexagon", "heavy hexagon", "socket", "pan", "countersunk"),
        default="hexagon; heavy for A325, A490",
    ),
    _length(
        "bolt",
        "bearing_diameter",
        "outer diameter of the bearing face under the head",
        needed_for=CLAMP,
        default="of the head",
    ),
    _length("bolt", "hole_diameter", "clearance hole", default="medium fit"),
    _length("bolt", "shank_diameter", "unthreaded shank", default="thread nominal"),
    Key("bolt", "far_end", "choice", "what the thread engages", choices=("nut", "tapped"), default="nut"),
    Key(
        "bolt", "washer_thickness", "length", "under the head, or [head, nut]", shape="one or two", least=0, default="0"
    ),
    Key("bolt", "material", "material", "elastic constants of bolt and washers", default="steel"),
    _length("bolt.segment[]", "diameter", "diameter of the piece; the thread counts with its minor diameter"),
    _length("bolt.segment[]", "length", "length of the piece"),
    # tightening
    Key("tightening", "torque", "moment", "tightening torque", least=0, above=True, needed_for=SLIP),
    Key("tightening", "thread_friction", "friction", "between the threads", shape="one or range", needed_for=CLAMP),
    Key(
        "tightening",
        "head_friction",
        "friction",
        "under the turned head or nut",
        shape="one or range",
        needed_for=CLAMP,
    ),
    Key(
        "tightening",
        "nut_factor",
        "number",
        "torque / (preload x diameter), in place of both frictions",
        shape="one or range",
        least=0.03,
        most=1.0,
        needed_for=CLAMP,
    ),
    Key("tightening", "prevailing_torque", "moment", "of locking elements", shape="one or range", least=0, default="0"),
    Key(
        "tightening",
        "method",
        "text",
        "its scatter, friction included; see slip tables tightening",
        default="the worst row",
    ),
    Key(
        "tightening",
        "tool_accuracy",
        "share",
        "the wrench alone, in place of method; multiplies the friction range",
        least=0,
        most=1,
    ),
    Key("tightening", "scatter", "share", "plus and minus, a bound; in place of method", least=0, most=1),
    Key("tightening", "scatter_ratio", "number", "highest / lowest preload; in place of method", least=1),
    Key("tightening", "scatter_sigma", "share", "standard deviation; with sigmas", least=0, most=1),
    Key("tightening", "sigmas", "number", "how many scatter_sigma are the bound", least=1, most=6),
    Key(
        "tightening",
        "preload",
        "preload",
        "[lowest, highest] as measured, per bolt { B1 = [..], others = [..] }, or a nominal with a scatter",
        needed_for=SLIP,
    ),
    Key("tightening", "source", "text", "where torque or preload comes from"),
    # losses
    Key("losses", "embedding", "embedding", '"auto" (table), a length, or a force', default='"auto"'),
    Key("losses", "relaxation", "share", "of the assembly preload", least=0, most=1, default="5 %"),
    Key("losses", "thermal", "thermal", "rises { bolt =, plates = [..] }, or a loss as a force", default="none"),
    # plates
    Key("plate[]", "name", "text", "what the plate is"),
    Key("plate[]", "material", "material", "a table entry, or { youngs_modulus =, .. }", needed_for="springs"),
    _length("plate[]", "thickness", "thickness", needed_for="springs"),
    Key(
        "plate[]",
        "outline",
        "outline",
        "[x0, y0, x1, y1] or { outer_diameter =, inner_diameter = }",
        needed_for=PARTIAL,
    ),
    Key(
        "plate[]",
        "load_edge",
        "choice",
        "edge through which the plate's load enters or leaves",
        choices=("left", "right", "bottom", "top"),
        needed_for=PARTIAL,
    ),
    # interface
    Key(
        "interface",
        "friction",
        "interface friction",
        '[lowest, highest] that can be defended, or { pair = "steel / steel", preparation = ".." }',
        needed_for=SLIP,
    ),
    Key("interface", "friction_source", "text", "where the friction comes from"),
    Key(
        "interface",
        "fluid_can_reach",
        "flag",
        "the lower of dry and lubricated counts when friction comes from the table",
        default="true",
    ),
    Key("interface", "run_in_friction", "friction", "after running in, for fretting stress only", later=True),
    Key(
        "interface",
        "parallel_faces",
        "whole",
        "paths side by side that share the load; a shim adds none",
        least=1,
        most=100,
        default="1",
    ),
    Key(
        "interface",
        "roughness",
        "roughness",
        'of the two faces, ["Ra 0.8 um", "Ra 1.6 um"]; label Ra, Rq or Rz',
        needed_for="embedding",
    ),
    Key(
        "interface",
        "tangential_stiffness",
        "stiffness per area",
        "measured, rig and bulk taken out",
        shape="range",
        least=LEAST_PER_AREA,
        most=MOST_PER_AREA,
    ),
    Key(
        "interface",
        "pressure",
        "pressure",
        "known, even pressure over the overlap of the plates' outlines, in place of bolts",
        least=0,
        above=True,
    ),
    Key("interface", "plate_shear", "flag", "count the plates' shear through the thickness", default="true"),
    # pattern
    Key("pattern", "positions", "positions", "[[x, y], ..]: names B1, B2, .. in this order"),
    Key("pattern", "names", "names", "names in place of B1, B2, .."),
    Key("pattern", "grid", "grid", "{ columns =, rows =, pitch = [.., ..] } round the origin"),
    Key("pattern", "circle", "circle", "{ count =, diameter = } round the origin, the first on the x axis"),
    Key("pattern", "file", "text", "CSV with name, x[mm], y[mm], optional preload_low[N], preload_high[N]"),
    # axial
    Key(
        "axial", "meaning", "choice", "what an axial force is", choices=("external", "bolt force", "bolt force change")
    ),
    Key("axial", "model_preload", "force", "preload in the model whose bolt forces are given", least=0),
    Key("axial", "model_bolt_share", "share", "bolt share in that model", least=0, above=True, most=1),
    Key(
        "axial",
        "bolt_share",
        "share",
        "share of an external axial load that the bolt takes",
        shape="one or range",
        least=0,
        most=1,
    ),
    Key("axial", "load_introduction", "number", "n of bolt_share = n x the spring ratio", least=0, most=1),
    Key("axial", "credit_compression", "flag", "may an axial compression add friction?", default="false"),
    # required
    Key("required", "static", "number", "factor for static cases", least=1, default="1.2"),
    Key("required", "alternating", "number", "factor for alternating cases", least=1, default="1.8"),
    Key("required", "decides", "choice", "which factor decides", choices=("per bolt", "group"), default="per bolt"),
    Key("required", "decides_reason", "text", "why the group may decide; printed in the verdict"),
    Key(
        "required", "grows", "choice", "what the factor multiplies", choices=("all loads", "shear"), default="all loads"
    ),
    Key("required", "true_slip", "length", "your own limit of true slip", least=0),
    # standards
    Key(
        "standard[]",
        "name",
        "choice",
        "which standard",
        choices=("EN 1993-1-8", "AISC 360", "VDI 2230", "NASA-STD-5020"),
    ),
    Key("standard[]", "to_standard_level", "number", "multiplies the loads to the standard's level", least=0.5),
    Key("standard[]", "category", "choice", "EN: B (serviceability) or C (ultimate)", choices=("B", "C")),
    Key("standard[]", "slip_class", "choice", "EN: class of the faying surface", choices=("A", "B", "C", "D")),
    Key("standard[]", "slip_factor", "friction", "characteristic value, in place of a class or surface"),
    Key(
        "standard[]",
        "hole",
        "choice",
        "hole type",
        choices=("normal", "oversized", "short slot", "long slot"),
        default="normal",
    ),
    Key("standard[]", "slot", "choice", "load along or across the slot", choices=("along", "across")),
    Key("standard[]", "edition", "choice", "AISC", choices=("2005", "2016"), default="2016"),
    Key("standard[]", "method", "choice", "AISC", choices=("LRFD", "ASD")),
    Key(
        "standard[]",
        "surface",
        "choice",
        "AISC: class A or B; NASA: how the faying surface is known",
        choices=("A", "B", "clean bare", "tested", "other"),
    ),
    Key("standard[]", "filler_factor", "number", "AISC: h_f", least=0.85, most=1, default="1"),
    Key("standard[]", "limit", "choice", "AISC 2005", choices=("strength", "serviceability"), default="strength"),
    Key(
        "standard[]",
        "friction_radius",
        "length",
        "VDI: radius at which a torque about the bolt is held",
        least=0,
        above=True,
    ),
    Key("standard[]", "safety_factor", "number", "NASA: factor of safety", least=1),
    Key("standard[]", "fitting_factor", "number", "NASA: fitting factor", least=1, default="1"),
    Key("standard[]", "preload_variation", "share", "NASA: Gamma", least=0, most=1),
    Key(
        "standard[]",
        "c_min",
        "number",
        "NASA: lowest torque over nominal torque",
        least=0,
        above=True,
        most=1,
        default="1",
    ),
    # cases
    Key("case[]", "name", "text", "what happens"),
    Key("case[]", "acts_on", "choice", "needed when there is more than one bolt", choices=("joint", "each bolt")),
    Key("case[]", "shear", "force", "in the interface plane, on the upper plate", shape="2", default="0"),
    Key("case[]", "axial", "force", "tension positive: it opens the joint", default="0"),
    Key("case[]", "moment", "moment", "free couple about x, y and the normal", shape="3", default="0"),
    Key(
        "case[]",
        "at",
        "length",
        "where shear and axial act, [x, y] or [x, y, z above the sliding face]",
        shape="2 or 3",
        default="centroid",
    ),
    Key("case[]", "kind", "choice", "static or alternating", choices=("static", "alternating"), default="alternating"),
    Key(
        "case[]", "ratio", "number", "smallest / largest: other end = ratio x this one", least=-1, most=1, default="-1"
    ),
    Key("case[]", "other_end", "other end", "{ shear =, axial =, moment = }; what it does not name stays"),
    Key("case[]", "peak", "text", '"3 sigma, unsigned": components without sign or phase'),
    Key("case[]", "cycles", "number", "number of cycles", least=0, above=True, later=True),
    Key("case[]", "thermal", "force", "loss that overrides [losses] thermal", least=0),
    # pressed contact
    Key("contact", "shape", "choice", "profile", choices=("sphere", "cylinder", "flat", "rounded flat")),
    _length("contact", "radius", "radius of the profile or of its edge"),
    _length("contact", "flat_width", "width of the flat part"),
    _length("contact", "length", "length of a cylinder or strip"),
    Key("contact", "normal_force", "force", "force that presses", least=0, above=True),
    Key("contact", "bulk_stress", "pressure", "tension in one body along the shear"),
    Key("body[]", "material", "material", "of the body"),
    # finite elements
    Key(
        "finite_elements",
        "purpose",
        "choice",
        "what the contact stiffness is for",
        choices=("stick", "interface"),
    ),
    Key(
        "finite_elements",
        "present",
        "present stiffness",
        "one of { per_area =, per_node =, elastic_slip =, edge_fraction =, of_normal = }",
    ),
    Key(
        "finite_elements",
        "present_normal",
        "stiffness per area",
        "normal contact stiffness",
        least=LEAST_PER_AREA,
        most=MOST_PER_AREA,
    ),
    Key("finite_elements", "friction", "friction", "of the model"),
    Key(
        "finite_elements",
        "element_size",
        "length",
        "edge in the face; one, or upper and lower",
        shape="one or two",
        least=0,
        above=True,
    ),
    _length("finite_elements", "element_depth", "edge normal to the face"),
    Key("finite_elements", "element_order", "whole", "1 or 2", least=1, most=2),
    Key("finite_elements", "dimension", "whole", "2 or 3", least=2, most=3),
    _length("finite_elements", "width", "out of plane, for dimension 2"),
    Key("finite_elements", "unknowns", "number", "of the model", least=1),
    Key("finite_elements", "steps_per_cycle", "whole", "load steps in a cycle", least=1),
    Key("finite_elements", "scheme", "choice", "time integration", choices=("implicit", "explicit")),
    Key("finite_elements", "precision", "choice", "of the arithmetic", choices=("single", "double")),
    # fretting, loosening, scatter, table
    Key(
        "fretting",
        "wear_per_energy",
        "wear per energy",
        "worn volume per dissipated energy",
        shape="one or range",
        least=0,
        later=True,
    ),
    Key("fretting", "fatigue_limit", "pressure", "of the material, fully reversed", least=0, above=True, later=True),
    Key("fretting", "averaging_length", "length", "over which stresses are averaged", least=0, above=True, later=True),
    Key("loosening", "transverse_motion", "length", "imposed at the head, amplitude", least=0, later=True),
    Key("loosening", "head_rotation_stiffness", "moment", "per radian at the head", least=0, above=True, later=True),
    Key(
        "loosening", "thread_rotation_stiffness", "moment", "per radian at the thread", least=0, above=True, later=True
    ),
    Key("loosening", "limit", "flag", "must the screen pass?", default="false", later=True),
    Key("scatter", "distributions", "anything", "per input", later=True),
    Key("scatter", "correlation", "anything", "between inputs", later=True),
    Key("scatter", "target", "number", "reliability index to be met", later=True),
    Key("table", "units", "choice", "of headers without a unit", choices=("N mm", "lbf in")),
    Key("table", "columns", "anything", "the table's own names of our columns"),
    Key("table", "axes", "anything", "axes of the table along x, y and the normal, right-handed", default="X, Y, Z"),
    Key("table", "decimal", "choice", "decimal sign", choices=(".", ","), default="as detected, which is said"),
)

BY_TABLE: dict[str, dict[str, Key]] = {name: {k.name: k for k in KEYS if k.table == name} for name in TABLES}
