"""A finding on its way to becoming a diagnostic."""

from __future__ import annotations

__all__ = ["Problem"]


class Problem(Exception):  # noqa: N818 - not a failure of the program; a caller gives it a place
    """Something that cannot be meant, found where its place in the file is not known.

    Attributes:
        code: For the diagnostic.
        message: What is wrong.
        hint: How to mend it.
        offset: Character in the text that was looked at.
        known: It follows from something that has its own error already.
    """

    def __init__(
        self,
        code: str,
        message: str,
        hint: str | None = None,
        *,
        offset: int = 0,
        known: bool = False,
    ) -> None:
        super().__init__(message)
        self.code = code
        self.message = message
        self.hint = hint
        self.offset = offset
        self.known = known
