"""What must be said beside a number: an assumption that was made because the file was silent, or a warning."""

from __future__ import annotations

from slip.base.records import record


@record
class Note:
    """`code` names the entry in docs/messages.md, `text` is one sentence, `key` the joint-file key that would settle it."""

    code: str
    text: str
    key: str = ""

    def as_dict(self) -> dict[str, str]:
        """The note as the contract's JSON object."""
        return {"code": self.code, "text": self.text, "key": self.key}
