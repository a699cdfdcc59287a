"""Numbers in screen tables as the reader writes them: the decimal mark and thousands mark of the browser's language."""

from __future__ import annotations

from dataclasses import dataclass

from babel import Locale, UnknownLocaleError

#: A figure space between thousands reads the same as any other space and does not break.
_SPACES = "\u0020\u00a0\u202f\u2009"


@dataclass(frozen=True)
class Marks:
    """Decimal mark and thousands mark."""

    decimal: str = "."
    thousands: str = ","

    def turn(self, text: str) -> str:
        """A number as the program writes it ("1,234.5", "<0.1%") in these marks; other text as it is."""
        if not any(c.isdigit() for c in text):
            return text
        return text.replace(",", "\0").replace(".", self.decimal).replace("\0", self.thousands)


def marks_of(language: str | None) -> Marks:
    """The marks of a language tag such as "de-DE"; point and comma where it is not known."""
    try:
        symbols = Locale.parse((language or "en").replace("_", "-"), sep="-").number_symbols["latn"]
    except (UnknownLocaleError, ValueError, KeyError):
        return Marks()
    group = symbols["group"]
    return Marks(symbols["decimal"], "\u202f" if group in _SPACES else group)
