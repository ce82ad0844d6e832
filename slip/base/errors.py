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
        """One sentence on one line: control and direction characters of the input do not reach a terminal."""
        place = f"{self.file}, line {self.line}" if self.line else self.file
        parts = [part for part in (place, self.key) if part]
        sentence = ": ".join([*parts, f"found {self.found}, expected {self.expected}; {self.remedy.rstrip('.')}"])
        end = "" if self.remedy.endswith("?") else "."
        return "".join(c if c.isprintable() else "?" for c in sentence) + end

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
    """Several input errors that come together; `errors` holds them file by file, as first met, and there by line."""

    code = "problems"

    def __init__(self, errors: list[InputError]) -> None:
        files = list(dict.fromkeys(e.file for e in errors))
        self.errors = sorted(errors, key=lambda e: (files.index(e.file), e.line))
        super().__init__("\n".join(str(e) for e in self.errors))
