"""Names for files that are handed out."""

from __future__ import annotations

import re
import unicodedata


def file_name(*parts: str) -> str:
    """Parts as a plain file name without ending: letters, digits and hyphens, at most 80 long."""
    plain = unicodedata.normalize("NFKD", " ".join(parts)).encode("ascii", "ignore").decode()
    return re.sub("[^a-z0-9]+", "-", plain.lower()).strip("-")[:80].strip("-") or "record"
