"""The one error family: every refusal carries a code, a text, a hint and its place in the input."""

from __future__ import annotations


class StackdbError(Exception):
    """Base of every error that a user can cause.

    ``code`` names the kind of fault in lower case with hyphens and is stable; ``text`` says what is
    wrong, ``hint`` what would be right, ``layer`` (from 1 at the touched side) and ``span`` (start and
    end character) where. ``exit_status`` is what the command line ends with.
    """

    exit_status = 2

    def __init__(
        self,
        code: str,
        text: str,
        hint: str = "",
        *,
        layer: int | None = None,
        span: tuple[int, int] | None = None,
    ) -> None:
        super().__init__(text)
        self.code = code
        self.text = text
        self.hint = hint
        self.layer = layer
        self.span = span

    def __str__(self) -> str:
        place = f"layer {self.layer}: " if self.layer is not None else ""
        return f"{place}{self.text}" + (f"; {self.hint}" if self.hint else "")

    def at_layer(self, layer: int, span: tuple[int, int] | None = None) -> StackdbError:
        """The same error with its place in the stack, for parsers that know no layers."""
        return type(self)(self.code, self.text, self.hint, layer=layer, span=span or self.span)

    def to_dict(self) -> dict[str, object]:
        """The JSON object of the contract: ``{"format": 1, "error": {...}}``."""
        return {
            "format": 1,
            "error": {
                "code": self.code,
                "text": self.text,
                "hint": self.hint or None,
                "layer": self.layer,
                "span": list(self.span) if self.span else None,
            },
        }


class InputError(StackdbError, ValueError):
    """The input cannot be used: a name, a number, a unit, a setting."""


class FileError(StackdbError, OSError):
    """A file cannot be used: missing, damaged, from a newer version, not writable."""

    exit_status = 3
