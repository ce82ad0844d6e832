"""Quantities at the door: text with a unit, or a bare number in the file's declared system; inside N, mm, s, K and what follows from them.

A dimension is the tuple of powers of (force, length, temperature step, time). Mass is not a base: 1 kg = 1 N s^2/m.
"""

from __future__ import annotations

import re

from slip.base.records import record

Dimension = tuple[int, int, int, int]

NONE: Dimension = (0, 0, 0, 0)
# The kinds of quantity that the program has words for.
KINDS: dict[str, Dimension] = {
    "force": (1, 0, 0, 0),
    "length": (0, 1, 0, 0),
    "pressure": (1, -2, 0, 0),
    "moment": (1, 1, 0, 0),
    "energy": (1, 1, 0, 0),
    "temperature rise": (0, 0, 1, 0),
    "stiffness per area": (1, -3, 0, 0),
    "stiffness": (1, -1, 0, 0),
    "compliance": (-1, 1, 0, 0),
    "force per length": (1, -1, 0, 0),
    "expansion": (0, 0, -1, 0),
    "density": (1, -4, 0, 2),
    "wear per energy": (-1, 2, 0, 0),
    "time": (0, 0, 0, 1),
    "share": NONE,
    "number": NONE,
}

POUND = 4.4482216152605  # N in one pound-force, exact: 0.45359237 kg x 9.80665 m/s^2
INCH = 25.4  # mm, exact
RANKINE = 5.0 / 9.0  # K in one degree Fahrenheit step, exact

UNITS: dict[str, tuple[float, Dimension]] = {
    "N": (1.0, (1, 0, 0, 0)),
    "kN": (1e3, (1, 0, 0, 0)),
    "MN": (1e6, (1, 0, 0, 0)),
    "lbf": (POUND, (1, 0, 0, 0)),
    "kipf": (1e3 * POUND, (1, 0, 0, 0)),
    "mm": (1.0, (0, 1, 0, 0)),
    "cm": (10.0, (0, 1, 0, 0)),
    "m": (1e3, (0, 1, 0, 0)),
    "um": (1e-3, (0, 1, 0, 0)),
    "nm": (1e-6, (0, 1, 0, 0)),
    "in": (INCH, (0, 1, 0, 0)),
    "ft": (12 * INCH, (0, 1, 0, 0)),
    "mil": (1e-3 * INCH, (0, 1, 0, 0)),
    "uin": (1e-6 * INCH, (0, 1, 0, 0)),
    "Pa": (1e-6, (1, -2, 0, 0)),
    "kPa": (1e-3, (1, -2, 0, 0)),
    "MPa": (1.0, (1, -2, 0, 0)),
    "GPa": (1e3, (1, -2, 0, 0)),
    "bar": (0.1, (1, -2, 0, 0)),
    "psi": (POUND / INCH**2, (1, -2, 0, 0)),
    "ksi": (1e3 * POUND / INCH**2, (1, -2, 0, 0)),
    "Msi": (1e6 * POUND / INCH**2, (1, -2, 0, 0)),
    "J": (1e3, (1, 1, 0, 0)),
    "mJ": (1.0, (1, 1, 0, 0)),
    "K": (1.0, (0, 0, 1, 0)),
    "degF": (RANKINE, (0, 0, 1, 0)),
    "kg": (1e-3, (1, -1, 0, 2)),
    "g": (1e-6, (1, -1, 0, 2)),
    "t": (1.0, (1, -1, 0, 2)),
    "s": (1.0, (0, 0, 0, 1)),
    "ms": (1e-3, (0, 0, 0, 1)),
    "min": (60.0, (0, 0, 0, 1)),
    "h": (3600.0, (0, 0, 0, 1)),
    "%": (0.01, NONE),
}
ALIASES = {"µm": "um", "μm": "um", "inch": "in", '"': "in", "°F": "degF", "Nm": "N m", "kNm": "kN m", "Nmm": "N mm"}
ONE_WAY = "a unit that can be read in one way"
POUNDS = (ONE_WAY, "lb is a mass or a force; write lbf for a force")
KIPS = (ONE_WAY, "kip is a mass or a force; write kipf for a force")
RISE = ("a temperature rise in K or degF", 'write the rise since assembly, for instance "40 K" or "72 degF"')
# Units that are refused: what is expected, and the words to write instead.
AMBIGUOUS = {
    "lb": POUNDS,
    "lbs": POUNDS,
    "kip": KIPS,
    "kips": KIPS,
    "kgf": ("a force in N or lbf", "write the force in N or lbf; 1 kgf is 9.80665 N"),
    "degC": RISE,
    "°C": RISE,
    "C": RISE,
    "F": RISE,
}
QUANTITY = re.compile(r"\s*([-+]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][-+]?[0-9]+)?)\s*(.*?)\s*$")
FACTOR = re.compile(r"(.*?)(?:\^?(-?[0-9])|([²³]))?$")
SECOND_NUMBER = re.compile(r"(?!1/[^0-9])[,.0-9]|/[0-9]")  # what cannot begin a unit, which 1/K can
PRODUCT = re.compile(r"[ *·]+|(?<=[A-Za-z])-(?=[A-Za-z])")


class UnitError(ValueError):
    """A text that is not a quantity; `code`, `expected` and `remedy` are those of an InputError."""

    def __init__(self, code: str, expected: str, remedy: str) -> None:
        super().__init__(f"expected {expected}; {remedy}")
        self.code = code
        self.expected = expected
        self.remedy = remedy


@record
class System:
    """A consistent set of units: factor to the inside units and name, per base dimension; `name` is what a file declares."""

    name: str
    force: str
    length: str
    pressure: str
    temperature: str

    def factor(self, dimension: Dimension) -> float:
        """Inside units in one unit of this system, for a dimension."""
        f, l, k, _ = dimension  # noqa: E741
        return float(UNITS[self.force][0] ** f * UNITS[self.length][0] ** l * UNITS[self.temperature][0] ** k)

    def unit(self, kind: str) -> str:
        """The system's unit of a kind of quantity, as text."""
        special = {
            "force": self.force,
            "length": self.length,
            "pressure": self.pressure,
            "moment": f"{self.force} {self.length}",
            "energy": f"{self.force} {self.length}",
            "temperature rise": self.temperature,
            "stiffness per area": f"{self.force}/{self.length}^3",
            "stiffness": f"{self.force}/{self.length}",
            "compliance": f"{self.length}/{self.force}",
            "force per length": f"{self.force}/{self.length}",
            "expansion": f"1/{self.temperature}",
            "density": f"{self.force} s^2/{self.length}^4",
            "wear per energy": f"{self.length}^2/{self.force}",
            "time": "s",
        }
        return special.get(kind, "1")

    def out(self, value: float, kind: str) -> float:
        """A value of the inside units in this system's unit."""
        return value / self.factor(KINDS[kind])

    def say(self, value: float, kind: str) -> str:
        """A value of the inside units as text with this system's unit, six digits at most."""
        unit = self.unit(kind)
        return f"{self.out(value, kind):.6g}" + ("" if unit == "1" else f" {unit}")


SI = System("N mm", "N", "mm", "MPa", "K")
US = System("lbf in", "lbf", "in", "psi", "degF")
SYSTEMS = {SI.name: SI, US.name: US}


def parse_unit(text: str) -> tuple[float, Dimension]:
    """Factor to the inside units and dimension of a unit text such as "N m", "N/mm^3" or "lbf in".

    Raises UnitError for a unit that is unknown, or that could be read in two ways.
    """
    text = ALIASES.get(text.strip(), text.strip())
    total, powers = 1.0, [0, 0, 0, 0]
    for position, part in enumerate(text.split("/")):
        sign = 1 if position == 0 else -1
        for word in PRODUCT.split(part.strip("() ")):
            if not word or (word == "1" and position == 0):
                continue
            match = FACTOR.match(word)
            assert match is not None
            name, digits, raised = match.groups()
            name = ALIASES.get(name, name)
            power = sign * (int(digits) if digits else {"²": 2, "³": 3}.get(raised or "", 1))
            if name in AMBIGUOUS:
                raise UnitError("unit-ambiguous", *AMBIGUOUS[name])
            if name not in UNITS:
                known = "N, kN, lbf, mm, in, MPa, psi, N m, lbf in, N/mm^3, K, degF, %"
                raise UnitError("unit-unknown", "a known unit", f"write units like {known}")
            factor, dimension = UNITS[name]
            total *= factor**power
            powers = [p + power * d for p, d in zip(powers, dimension, strict=True)]
    return total, (powers[0], powers[1], powers[2], powers[3])


def split(text: str, kind: str = "force") -> tuple[float, str]:
    """Number and unit text of a quantity such as "12 kN"; UnitError, with an example of the kind, when it has no such form."""
    match = QUANTITY.match(text)
    if match is None:
        raise UnitError("not-a-quantity", a(kind), f"write for instance {example(kind)}")
    if SECOND_NUMBER.match(match.group(2)):
        remedy = "write it with a point for decimals, without spaces, commas or fractions"
        raise UnitError("not-a-quantity", "one number before the unit", remedy)
    return float(match.group(1)), match.group(2)


def example(kind: str) -> str:
    """A quantity of the kind as one would type it, for messages."""
    return {
        "force": '"12 kN" or "2700 lbf"',
        "length": '"8 mm" or "0.3 in"',
        "pressure": '"60 MPa" or "9 ksi"',
        "moment": '"210 N m" or "1850 lbf in"',
        "energy": '"2 mJ"',
        "temperature rise": '"40 K" or "72 degF"',
        "stiffness per area": '"12000 N/mm^3"',
        "stiffness": '"2e5 N/mm"',
        "compliance": '"2e-6 mm/N"',
        "force per length": '"150 N/mm"',
        "expansion": '"11.5e-6 1/K"',
        "density": '"7850 kg/m^3"',
        "wear per energy": '"2e-5 mm^3/J"',
        "share": '"5 %" or 0.05',
        "time": '"2 s"',
        "friction": "0.15",
    }.get(kind, "1.5")


def parse(text: str, kind: str) -> float:
    """Value in inside units of a quantity given as text, of the stated kind.

    Raises UnitError when the number or the unit cannot be read, or when the unit is of another kind.
    """
    value, unit = split(text, kind)
    wanted = KINDS[kind]
    if not unit and wanted != NONE:
        raise UnitError("unit-missing", f"{a(kind)} with a unit", f"write for instance {example(kind)}")
    factor, dimension = parse_unit(unit)
    if dimension != wanted:
        raise UnitError("unit-wrong", a(kind), f"write for instance {example(kind)}")
    return value * factor


def a(kind: str) -> str:
    """The kind with its article."""
    return f"an {kind}" if kind[0] in "aeiou" else f"a {kind}"
