"""Errors: one base class, each error one sentence that says where, what was found, what was expected and what to write."""

from __future__ import annotations

from dataclasses import dataclass


class SlipError(Exception):
    """Base of every error that the program raises on purpose; `code` names its entry in docs/messages.md."""

    code: str


class NotConverged(SlipError):
    """A numerical answer could not be proven; no number is returned. `text` says what to try."""

    def __init__(self, code: str, text: str) -> None:
        super().__init__(text)
        self.code = code


@dataclass(eq=False)
class InputError(SlipError):
    """One fault of an input: code, file, line (1-based, 0 unknown), key, what was found and expected, what to write instead."""

    code: str
    key: str
    found: str
    expected: str
    remedy: str
    file: str = ""
    line: int = 0

    def __str__(self) -> str:
        place = self.file
        if self.line:
            place += f", line {self.line}"
        parts = [p for p in (place, self.key) if p]
        sentence = ": ".join([*parts, f"found {self.found}, expected {self.expected}"])
        return f"{sentence}; {self.remedy.rstrip('.')}" + ("" if self.remedy.endswith("?") else ".")

    def as_dict(self) -> dict[str, object]:
        """The error as the contract's JSON object."""
        return {
            "code": self.code,
            "file": self.file,
            "line": self.line,
            "key": self.key,
            "found": self.found,
            "expected": self.expected,
            "remedy": self.remedy,
        }


class Problems(SlipError):
    """Several input errors that come together; `errors` holds them in file order."""

    code = "problems"

    def __init__(self, errors: list[InputError]) -> None:
        self.errors = sorted(errors, key=lambda e: e.line)
        super().__init__("\n".join(str(e) for e in self.errors))
