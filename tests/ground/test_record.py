"""A record is what a frozen dataclass with slots is."""

from __future__ import annotations

import copy
import pickle
from dataclasses import FrozenInstanceError, asdict, dataclass, field, fields, replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fluxnet.ground.record import record


@record
class Mixed:
    """Fields of every sort."""

    first: int
    second: str = "b"
    third: list[int] = field(default_factory=list)
    unseen: float = field(default=0.0, compare=False, repr=False)
    made: int = field(init=False, default=0)

    def __post_init__(self) -> None:
        object.__setattr__(self, "made", self.first + 1)

    @property
    def twice(self) -> int:
        return 2 * self.first


@dataclass(frozen=True, slots=True)
class Reference:
    """The same, as the standard library makes it."""

    first: int
    second: str = "b"
    third: tuple[int, ...] = ()
    unseen: float = field(default=0.0, compare=False, repr=False)


@record
class Same:
    """Its counterpart."""

    first: int
    second: str = "b"
    third: tuple[int, ...] = ()
    unseen: float = field(default=0.0, compare=False, repr=False)


@record
class One:
    """A single field."""

    value: object


@record
class Empty:
    """No field."""


@record
class Alike:
    """Equal to all that start alike."""

    text: str

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Alike) and self.text[:1] == other.text[:1]

    def __hash__(self) -> int:
        return hash(self.text[:1])


VALUES = st.fixed_dictionaries(
    {"first": st.integers(0, 2)},
    optional={
        "second": st.sampled_from("ab"), "third": st.just((1,)),
        "unseen": st.sampled_from([0.0, 1.0]),
    },
)  # fmt: skip


@given(VALUES, VALUES)
def test_it_compares_hashes_and_shows_itself_as_a_dataclass_does(
    one: dict[str, object], other: dict[str, object]
) -> None:
    mine, theirs = (Same(**one), Same(**other)), (Reference(**one), Reference(**other))  # type: ignore[arg-type]

    assert (mine[0] == mine[1]) == (theirs[0] == theirs[1])
    assert (hash(mine[0]) == hash(mine[1])) == (hash(theirs[0]) == hash(theirs[1]))
    assert repr(mine[0]).removeprefix("Same") == repr(theirs[0]).removeprefix("Reference")
    assert asdict(mine[0]) == asdict(theirs[0])
    assert [f.name for f in fields(Same)] == [f.name for f in fields(Reference)]


def test_fields_get_their_defaults_each_time_anew() -> None:
    one, other = Mixed(1), Mixed(1, third=[])

    assert one == other
    assert one.third is not Mixed(1).third
    assert (one.second, one.made, one.twice) == ("b", 2, 2)


def test_values_that_differ_in_type_alone_are_not_equal() -> None:
    assert One(1) != object()
    assert One(1).__eq__(Mixed(1)) is NotImplemented
    assert One(1).__eq__(1) is NotImplemented
    assert Empty() == Empty()
    assert hash(One(3)) == hash(One(3))


def test_methods_of_its_own_stay() -> None:
    assert Alike("ab") == Alike("ac")
    assert len({Alike("ab"), Alike("ac"), Alike("b")}) == 2


def test_nothing_can_be_changed_or_added() -> None:
    value = Mixed(1)

    for name in ("first", "other"):
        with pytest.raises(FrozenInstanceError, match=name):
            setattr(value, name, 2)
    with pytest.raises(FrozenInstanceError):
        del value.first
    assert not hasattr(value, "__dict__")


@pytest.mark.parametrize(
    ("values", "named", "message"),
    [((), {}, "first"), ((1, "b", [], 0.0, 3), {}, "positional"), ((1,), {"firts": 1}, "firts")],
)
def test_wrong_values_are_refused_by_name(
    values: tuple[object, ...], named: dict[str, object], message: str
) -> None:
    for _ in range(2):  # the first one compiles
        with pytest.raises(TypeError, match=message):
            Mixed(*values, **named)  # type: ignore[arg-type]


def test_replacing_copying_and_pickling_keep_the_values() -> None:
    value = Mixed(1, third=[5], unseen=2.0)

    assert replace(value, first=4).made == 5
    for again in (copy.copy(value), copy.deepcopy(value), pickle.loads(pickle.dumps(value))):
        assert again == value
        assert again.unseen == 2.0


def test_a_record_can_be_matched_by_place() -> None:
    match One(7):
        case One(value):
            assert value == 7


def test_the_compiled_method_has_the_name_of_its_class() -> None:
    One(1)

    assert One.__init__.__qualname__ == "One.__init__"
