"""A record is a frozen dataclass in all that can be asked of one."""

import copy
import dataclasses
import inspect
import pickle

import pytest

from slip.base.records import record


@record
class Point:
    """Two numbers and a list of its own."""

    x: float
    y: float = 2.0
    tags: list[str] = dataclasses.field(default_factory=list)


@record(eq=False)
class Alone:
    """Equal to itself only."""

    x: float


@record
class Checked:
    """Refuses what makes no sense."""

    x: float

    def __post_init__(self) -> None:
        if self.x < 0:
            raise ValueError("negative")

    def __repr__(self) -> str:
        return "own words"


def test_fields_by_place_by_name_and_by_default():
    assert Point(1.0).__dict__ == {"x": 1.0, "y": 2.0, "tags": []}
    assert Point(1.0, 3.0, tags=["a"]) == Point(tags=["a"], y=3.0, x=1.0)
    assert Point(1.0).tags is not Point(1.0).tags


@pytest.mark.parametrize(
    ("values", "named", "words"),
    [
        ((), {}, "needs a value for 'x'"),
        ((1, 2, [], 4), {}, "takes 3 values, not 4"),
        ((1,), {"x": 1}, "two values for 'x'"),
        ((1,), {"z": 1}, "unknown field 'z'"),
    ],
)
def test_wrong_values_are_a_type_error(values, named, words):
    with pytest.raises(TypeError, match=words):
        Point(*values, **named)


def test_it_is_frozen():
    point = Point(1.0)
    with pytest.raises(dataclasses.FrozenInstanceError, match="'x' cannot be changed"):
        point.x = 2.0
    with pytest.raises(dataclasses.FrozenInstanceError):
        del point.x
    with pytest.raises(dataclasses.FrozenInstanceError):
        point.new = 1
    assert point.x == 1.0


def test_equality_and_hash():
    @record
    class Other:
        """Like Point."""

        x: float

    assert Checked(1.0) == Checked(1.0) and Checked(1.0) != Checked(2.0) and Checked(1.0) != Other(1.0)
    assert hash(Checked(1.0)) == hash(Checked(1.0)) and len({Checked(1.0), Checked(1.0)}) == 1
    one, two = Alone(1.0), Alone(1.0)
    assert one == one and one != two and len({one, two}) == 2


def test_the_tools_of_dataclasses_work():
    point = Point(1.0, tags=["a"])
    assert dataclasses.is_dataclass(Point) and [f.name for f in dataclasses.fields(Point)] == ["x", "y", "tags"]
    assert dataclasses.replace(point, y=5.0) == Point(1.0, 5.0, ["a"])
    assert dataclasses.astuple(point) == (1.0, 2.0, ["a"]) and dataclasses.asdict(point)["y"] == 2.0
    match point:
        case Point(x, y):
            assert (x, y) == (1.0, 2.0)


def test_words_and_signature():
    assert repr(Point(1.0)) == "Point(x=1.0, y=2.0, tags=[])" and repr(Checked(1.0)) == "own words"
    assert list(inspect.signature(Point).parameters) == ["x", "y", "tags"]
    assert inspect.signature(Point).parameters["y"].default == 2.0
    assert inspect.signature(Point).parameters["x"].default is inspect.Parameter.empty


def test_what_is_checked_after_filling():
    with pytest.raises(ValueError, match="negative"):
        Checked(-1.0)


def test_copies_and_pickles():
    point = Point(1.0, tags=["a"])
    assert copy.copy(point) == copy.deepcopy(point) == pickle.loads(pickle.dumps(point)) == point


def test_the_records_of_a_joint_are_such():
    from slip.joint.material import Material
    from slip.verdict.checks import Check

    for cls in (Material, Check):
        assert dataclasses.is_dataclass(cls) and cls.__setattr__ is Point.__setattr__
