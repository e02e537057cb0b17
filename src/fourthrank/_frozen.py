"""Immutability for small value classes."""

from typing import NoReturn, Self


class Frozen:
    """Base of classes whose instances never change once they are made.

    Subclasses list ``__slots__`` and set them with ``object.__setattr__`` in the constructor. Since nothing can change,
    a copy is the object itself.
    """

    __slots__ = ()

    def __setattr__(self, name: str, value: object) -> NoReturn:
        raise AttributeError(f"{type(self).__name__} is immutable: {name!r} cannot be set")

    def __delattr__(self, name: str) -> NoReturn:
        raise AttributeError(f"{type(self).__name__} is immutable: {name!r} cannot be deleted")

    def __copy__(self) -> Self:
        return self

    def __deepcopy__(self, memo: dict[int, object]) -> Self:
        return self
