"""Frozen dataclasses with slots that are made quickly: the class of nearly every value here.

``@record`` gives what ``@dataclass(frozen=True, slots=True)`` gives. That one writes and compiles
six methods for each class while its module is imported; with some hundred classes a command
spent more time on them than on its answer. Here all records share their methods but
``__init__``, whose code is compiled once for all records with as many fields and then given
their names. What the standard library tells of fields is made when it is asked for.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import MISSING, Field, FrozenInstanceError, dataclass, field
from functools import cache
from operator import attrgetter
from types import CodeType, FunctionType
from typing import Any, NoReturn, TypeVar, cast, dataclass_transform

__all__ = ["record"]

Made = TypeVar("Made")

_put = object.__setattr__


@dataclass_transform(frozen_default=True, field_specifiers=(field,))
def record(cls: type[Made]) -> type[Made]:
    """Make a class a frozen dataclass with slots.

    Its fields may have the options ``default``, ``default_factory``, ``init``, ``repr`` and
    ``compare`` of :func:`dataclasses.field`. Methods of its own stay, such as ``__eq__``, and
    ``__post_init__`` is called. No other dataclass may be its base.

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
    own = dict(cls.__dict__)
    types: dict[str, Any] = own.get("__annotations__") or cls.__annotations__
    names = tuple(types)
    given = {name: own.pop(name) for name in names if name in own}
    options = {name: some for name, some in given.items() if isinstance(some, Field)}
    compared = tuple(n for n in names if n not in options or options[n].compare)
    taken = tuple(n for n in names if n not in options or options[n].init)
    body = {
        **_SHARED,
        "__match_args__": taken,
        "__dataclass_fields__": _Fields(types, given),
        "_compared": _reader(compared),
        "_shown": tuple(n for n in names if n not in options or options[n].repr),
        **own,
        "__slots__": names,
        "__qualname__": cls.__qualname__,
    }
    if "__init__" not in own:
        body["__init__"] = _initialiser(cls, taken, given)
    for name in ("__dict__", "__weakref__"):
        body.pop(name, None)
    made = type(cls)(cls.__name__, cls.__bases__, body)  # type: ignore[misc]
    return cast("type[Made]", made)


class _Fields:
    """What :mod:`dataclasses` tells of a class with these fields, made when first asked for."""

    def __init__(self, types: dict[str, Any], given: dict[str, Any]) -> None:
        self.types, self.given = types, given

    def __get__(self, value: object, owner: type) -> Any:
        """The fields by name; from then on they are an attribute of the class."""
        twin = type(owner.__name__, (), {"__annotations__": self.types, **self.given})
        # Without a text of its own it would be given its signature, at ten times the cost.
        twin.__module__, twin.__doc__ = owner.__module__, owner.__name__
        twin = dataclass(init=False, repr=False, eq=False)(twin)
        told = twin.__dataclass_fields__  # type: ignore[attr-defined]
        owner.__dataclass_fields__ = told  # type: ignore[attr-defined]
        return told


def _equal(self: Any, other: Any) -> Any:
    if other.__class__ is not self.__class__:
        return NotImplemented
    compared = self.__class__._compared
    return compared(self) == compared(other)


def _digest(self: Any) -> int:
    return hash(self.__class__._compared(self))


def _tell(self: Any) -> str:
    told = ", ".join(f"{name}={getattr(self, name)!r}" for name in self._shown)
    return f"{type(self).__qualname__}({told})"


def _state(self: Any) -> list[Any]:
    return [getattr(self, name) for name in self.__slots__]


def _restore(self: Any, values: list[Any]) -> None:
    for name, value in zip(self.__slots__, values, strict=True):
        _put(self, name, value)


def _refuse(self: object, name: str, value: object = None) -> NoReturn:
    raise FrozenInstanceError(f"cannot change field {name!r} of {type(self).__name__}")


_SHARED: dict[str, Any] = {
    "__eq__": _equal, "__hash__": _digest, "__repr__": _tell,
    "__getstate__": _state, "__setstate__": _restore,
    "__setattr__": _refuse, "__delattr__": _refuse,
}  # fmt: skip


def _reader(names: tuple[str, ...]) -> Any:
    """Gives the values of attributes as a tuple."""
    if len(names) > 1:
        return attrgetter(*names)
    if not names:
        return staticmethod(lambda value: ())
    only = attrgetter(*names)
    return staticmethod(lambda value: (only(value),))


def _initialiser(
    cls: type, taken: tuple[str, ...], given: dict[str, Any]
) -> Callable[..., None]:
    """The ``__init__`` of a record with these fields, some of them with defaults."""
    usual, makers = [], {}
    for k, name in enumerate(taken):
        default = given.get(name, MISSING)
        if isinstance(default, Field):
            if default.default_factory is not MISSING:
                makers[f"new{k}"] = default.default_factory
                default = None if default.default is MISSING else default.default
                usual.append(MISSING)
                continue
            default = default.default
        if default is not MISSING:
            usual.append(default)
        elif usual:
            raise TypeError(f"field {name!r} without a default follows one with a default")
    places = tuple(int(name[3:]) for name in makers)
    code = _template(len(taken), places, hasattr(cls, "__post_init__"))
    words = {f"a{k}": name for k, name in enumerate(taken)}
    code = code.replace(
        co_varnames=tuple(words.get(name, name) for name in code.co_varnames),
        co_consts=tuple(words.get(c, c) if isinstance(c, str) else c for c in code.co_consts),
        co_qualname=f"{cls.__qualname__}.__init__",
    )
    around = {"put": _put, "MISSING": MISSING, **makers}
    return FunctionType(code, around, "__init__", tuple(usual))


@cache
def _template(count: int, makers: tuple[int, ...], afterwards: bool) -> CodeType:
    """The code of an ``__init__`` of so many fields, called a0, a1, ...

    ``makers`` are the places of those that are made anew where they are not given.
    """
    lines = [f"if a{k} is MISSING: a{k} = new{k}()" for k in makers]
    lines += [f"put(self, 'a{k}', a{k})" for k in range(count)]
    lines += ["self.__post_init__()"] if afterwards else []
    heads = ", ".join(["self", *(f"a{k}" for k in range(count))])
    made: dict[str, Any] = {}
    exec(f"def __init__({heads}):\n    " + "\n    ".join(lines or ["pass"]), made)
    code: CodeType = made["__init__"].__code__
    return code
