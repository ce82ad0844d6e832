"""Records: frozen dataclasses whose methods are shared by all of them.

`dataclasses` writes and compiles the methods of every class anew at each start. With some seventy records that takes half as long as
importing numpy; here it takes no time worth speaking of. `dataclasses.fields`, `astuple` and `replace` work as ever.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import MISSING, Field, FrozenInstanceError, dataclass, field
from typing import TYPE_CHECKING, Any, TypeVar, dataclass_transform, overload

if TYPE_CHECKING:
    from inspect import Signature

T = TypeVar("T")


@overload
def record(cls: type[T], /) -> type[T]: ...
@overload
def record(*, eq: bool = True) -> Callable[[type[T]], type[T]]: ...


@dataclass_transform(frozen_default=True, field_specifiers=(field,))
def record(cls: type[T] | None = None, /, *, eq: bool = True) -> Any:
    """Decorator: a frozen dataclass. With eq=False a record equals itself only, as records that hold arrays must."""

    def make(cls: type[T]) -> type[T]:
        made = dataclass(init=False, repr=False, eq=False)(cls)  # keeps the fields and compiles nothing
        methods = {"__init__": _init, "__repr__": _repr, "__setattr__": _frozen, "__delattr__": _frozen}
        if eq:
            methods |= {"__eq__": _equal, "__hash__": _hash}
        for name, method in methods.items():
            if name not in cls.__dict__:
                setattr(made, name, method)
        made.__signature__ = _Signature()  # type: ignore[attr-defined]
        return made

    return make if cls is None else make(cls)


def _init(self: Any, /, *values: Any, **named: Any) -> None:
    """Fill the fields, by place or by name, and those that are left by their defaults."""
    cls, state = type(self), self.__dict__
    fields = cls.__dataclass_fields__
    if len(values) > len(fields):
        raise TypeError(f"{cls.__name__} takes {len(fields)} values, not {len(values)}")
    state.update(zip(fields, values, strict=False))
    for name, value in named.items():
        if name not in fields or name in state:
            raise TypeError(f"{cls.__name__} got {'two values for' if name in state else 'an unknown field'} {name!r}")
        state[name] = value
    if len(state) < len(fields):
        for name, one in fields.items():
            if name in state:
                continue
            if one.default is not MISSING:
                state[name] = one.default
            elif one.default_factory is not MISSING:
                state[name] = one.default_factory()
            else:
                raise TypeError(f"{cls.__name__} needs a value for {name!r}")
    if hasattr(cls, "__post_init__"):
        self.__post_init__()


def _values(one: Any) -> tuple[Any, ...]:
    return tuple(getattr(one, name) for name in type(one).__dataclass_fields__)


def _repr(self: Any) -> str:
    shown = ", ".join(f"{name}={getattr(self, name)!r}" for name in type(self).__dataclass_fields__)
    return f"{type(self).__qualname__}({shown})"


def _equal(self: Any, other: object) -> bool:
    return _values(self) == _values(other) if type(other) is type(self) else NotImplemented


def _hash(self: Any) -> int:
    return hash(_values(self))


def _frozen(self: Any, name: str, *value: Any) -> None:
    raise FrozenInstanceError(
        f"{type(self).__name__} is a record: {name!r} cannot be changed; dataclasses.replace makes another"
    )


class _Signature:
    """The signature of a record's class, made when somebody asks for it."""

    def __get__(self, one: object, cls: type) -> Signature:
        from inspect import Parameter, Signature

        def default(f: Field[Any]) -> Any:
            made = ... if f.default_factory is not MISSING else Parameter.empty
            return made if f.default is MISSING else f.default

        fields = cls.__dataclass_fields__.values()  # type: ignore[attr-defined]
        kind = Parameter.POSITIONAL_OR_KEYWORD
        return Signature([Parameter(f.name, kind, default=default(f), annotation=f.type) for f in fields])
