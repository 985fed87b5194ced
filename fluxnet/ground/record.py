"""Frozen dataclasses with slots that are made quickly: the class of nearly every value here.

``@record`` gives what ``@dataclass(frozen=True, slots=True)`` gives. That one writes and compiles
six methods for each class while its module is imported; with some hundred classes a command
spent more time on them than on its answer. A record's methods are closures over the names of its
fields, and its ``__init__`` alone is compiled, when the first one is made.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import MISSING, Field, FrozenInstanceError, dataclass, field, fields
from operator import attrgetter
from typing import Any, NoReturn, TypeVar, dataclass_transform

__all__ = ["record"]

Made = TypeVar("Made")

_put = object.__setattr__


@dataclass_transform(frozen_default=True, field_specifiers=(field,))
def record(cls: type[Made]) -> type[Made]:
    """Make a class a frozen dataclass with slots.

    Its fields may have all options of :func:`dataclasses.field`. Methods of its own stay, such as
    ``__eq__``, and ``__post_init__`` is called. No other dataclass may be its base.

    Examples
    --------
    >>> from dataclasses import replace
    >>> @record
    ... class Place:
    ...     line: int
    ...     column: int = 1
    >>> replace(Place(3), line=4)
    Place(line=4, column=1)
    >>> Place(3) == Place(3, 1), len({Place(3), Place(3)})
    (True, 1)
    """
    made = dataclass(init=False, repr=False, eq=False, slots=True)(cls)
    own = fields(made)  # type: ignore[arg-type]
    compared = _reader(tuple(f.name for f in own if f.compare))

    def start(self: Made, *values: Any, **named: Any) -> None:
        """Compile ``__init__`` in this one's place, and use it."""
        made.__init__ = _initialiser(made, own)  # type: ignore[method-assign]
        made.__init__(self, *values, **named)

    def equal(self: Made, other: object) -> Any:
        if other.__class__ is not self.__class__:
            return NotImplemented
        return compared(self) == compared(other)

    def digest(self: Made) -> int:
        return hash(compared(self))

    def shown(self: Made) -> str:
        told = ", ".join(f"{f.name}={getattr(self, f.name)!r}" for f in own if f.repr)
        return f"{type(self).__qualname__}({told})"

    def state(self: Made) -> list[Any]:
        return [getattr(self, f.name) for f in own]

    def restore(self: Made, values: list[Any]) -> None:
        for one, value in zip(own, values, strict=True):
            _put(self, one.name, value)

    methods: dict[str, Callable[..., Any]] = {
        "__init__": start, "__eq__": equal, "__hash__": digest, "__repr__": shown,
        "__getstate__": state, "__setstate__": restore,
        "__setattr__": _refuse, "__delattr__": _refuse,
    }  # fmt: skip
    for name, method in methods.items():
        if name not in cls.__dict__:
            setattr(made, name, method)
    return made


def _reader(names: tuple[str, ...]) -> Callable[[object], tuple[Any, ...]]:
    """Gives the values of attributes as a tuple."""
    if len(names) > 1:
        return attrgetter(*names)
    return lambda value: tuple(getattr(value, name) for name in names)


def _refuse(self: object, name: str, value: object = None) -> NoReturn:
    raise FrozenInstanceError(f"cannot change field {name!r} of {type(self).__name__}")


def _initialiser(made: type, own: tuple[Field[Any], ...]) -> Callable[..., None]:
    """The compiled ``__init__`` of a record."""
    names: dict[str, Any] = {"put": _put, "MISSING": MISSING}
    heads, lines = ["self"], []
    for one in own:
        if one.init and one.default_factory is not MISSING:
            names[f"new_{one.name}"] = one.default_factory
            heads.append(f"{one.name}=MISSING")
            lines.append(f"if {one.name} is MISSING: {one.name} = new_{one.name}()")
        elif one.init and one.default is not MISSING:
            names[f"usual_{one.name}"] = one.default
            heads.append(f"{one.name}=usual_{one.name}")
        elif one.init:
            heads.append(one.name)
        if one.init:
            lines.append(f"put(self, {one.name!r}, {one.name})")
    if hasattr(made, "__post_init__"):
        lines.append("self.__post_init__()")
    exec(f"def __init__({', '.join(heads)}):\n    " + "\n    ".join(lines or ["pass"]), names)
    compiled: Callable[..., None] = names["__init__"]
    compiled.__qualname__ = f"{made.__qualname__}.__init__"
    return compiled
