"""How far a long run has come, for whoever waits for it."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Sized
from typing import Protocol, TypeVar

Progress = Callable[[int, int], None]  # how much is done, and how much there is to do
T = TypeVar("T", covariant=True)


class Many(Sized, Iterable[T], Protocol[T]):
    """Things whose number is known."""


def told(items: Many[T], progress: Progress | None) -> Iterator[T]:
    """The items one by one; after each, how many are done."""
    for done, item in enumerate(items, start=1):
        yield item
        if progress is not None:
            progress(done, len(items))
