"""What a column of a manager's sheet is used for, and the words in headers that tell it."""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass

YEAR, REMOVALS, COUNT, CV, ERROR, NOTE, NOTHING = (
    "year",
    "removals",
    "count",
    "cv",
    "standard error",
    "note",
    "leave out",
)
ROLES = (YEAR, REMOVALS, COUNT, CV, ERROR, NOTE, NOTHING)
#: Roles of columns that hold numbers.
NUMERIC = (REMOVALS, COUNT, CV, ERROR)

#: English, German, French, Spanish and Scandinavian words, without accents; the first role that matches is taken.
_WORDS: tuple[tuple[str, str], ...] = (
    (NOTHING, "davon dont planned allowed"),
    (NOTHING, "quota quotas plan permit permits licence licences license licenses target hunters effort abschussplan"),
    (COUNT, "cpue"),
    (NOTE, "note notes remark remarks comment comments bemerkung bemerkungen anmerkung anmerkungen notiz notizen"),
    (NOTE, "kommentar kommentare kommentarer remarque remarques commentaire commentaires nota notas comentario"),
    (NOTE, "comentarios observaciones anmarkning anmarkningar merknad merknader bemaerkning bemaerkninger"),
    (CV, "cv variationskoeffizient variationskoefficient variasjonskoeffisient rsd"),
    (ERROR, "se standardfehler standardfel standardfeil standardfejl"),
    (REMOVALS, "removal removals removed harvest harvested bag bagged catch catches landings kill kills killed shot"),
    (REMOVALS, "cull culls culled take taken strecke abschuss abschusse erlegt erlegte entnahme entnahmen fang fange"),
    (REMOVALS, "prelevement prelevements tableau capture captures abattus tirs captura capturas caza cazados"),
    (REMOVALS, "abatidos cosecha extraccion avskjutning fallda felte uttak uttag jaktutbytte utbytte fangst nedlagt"),
    (REMOVALS, "vildtudbytte jagdstrecke"),
    (COUNT, "count counts counted census estimate estimates estimated survey abundance population index sightings"),
    (COUNT, "zahlung zahlungen gezahlt bestand schatzung erfassung comptage comptages recensement denombrement"),
    (COUNT, "effectif effectifs estimation censo censos conteo recuento estimacion abundancia poblacion rakning"),
    (COUNT, "inventering telling tellinger taelling optaelling uppskattning estimat taksering"),
    (YEAR, "year years season jahr jahre jagdjahr saison annee campagne ano anio temporada ar sesong sasong saeson"),
)
_PHRASES: tuple[tuple[str, str], ...] = (
    (NOTHING, "of which"),
    (COUNT, "per effort"),
    (COUNT, "per unit effort"),
    (CV, "coefficient of variation"),
    (CV, "coefficient de variation"),
    (CV, "coeficiente de variacion"),
    (CV, "coef de variacion"),
    (CV, "coef de variation"),
    (CV, "coeff of variation"),
    (ERROR, "standard error"),
    (ERROR, "std error"),
    (ERROR, "s e"),
    (ERROR, "erreur type"),
    (ERROR, "error estandar"),
)
#: Shorter words stand alone; longer ones are also found within compounds ("Winterzählung").
_COMPOUND = 6
#: Characters of a text that are looked at.
_READ = 200
_SUMMARY = (
    "total totals totale subtotal sum sums summe summen gesamt gesamtsumme zwischensumme insgesamt somme suma summa "
    "totalt mean average avg mittel mittelwert durchschnitt moyenne media promedio medel medelvarde snitt gjennomsnitt "
    "gennemsnit median minimum maximum min max"
)
_SUMMARY_START = re.compile(rf"(?:{_SUMMARY.replace(' ', '|')}|i alt|grand total|all years)\b")


@dataclass(frozen=True)
class ColumnUse:
    """What one column is used for.

    Attributes
    ----------
    column : int
        From 0; a row of the sheet as found where the mapping is transposed.
    role : str
        One of ``ROLES``. Several columns of removals are added up.
    survey : str
        For a count the survey's name ("" for the column's own name); for a CV or standard error the name of the
        survey that it belongs to ("" where there is only one).
    """

    column: int
    role: str
    survey: str = ""


@dataclass(frozen=True)
class Mapping:
    """Where a sheet's header is and what its columns are used for; columns not named are left out.

    Attributes
    ----------
    sheet : int
        From 0, in the book.
    header_first, header_end : int
        First row of the header and one past its last, from 0; equal where there is none.
    columns : tuple of ColumnUse
    transposed : bool
        The years run from left to right: rows and columns above are those of the turned sheet.
    """

    sheet: int
    header_first: int
    header_end: int
    columns: tuple[ColumnUse, ...]
    transposed: bool = False


def plain_words(text: str) -> str:
    """Lower case, without accents, words with one space between them."""
    bare = "".join(c for c in unicodedata.normalize("NFKD", text[:_READ].casefold()) if not unicodedata.combining(c))
    return " ".join(re.findall(r"[^\W_]+", bare.replace("ø", "o").replace("æ", "ae")))


def role_of(name: str) -> str | None:
    """The role that the words of a header tell, or None."""
    plain = plain_words(name)
    for role, phrase in _PHRASES:
        if f" {phrase} " in f" {plain} ":
            return role
    words = plain.split()
    for role, listed in _WORDS:
        for known in listed.split():
            if known in words or (len(known) >= _COMPOUND and any(known in word for word in words)):
                return role
    return None


def is_summary(text: str) -> bool:
    """Whether a text begins as the label of a total, a mean or the like."""
    return _SUMMARY_START.match(plain_words(text)) is not None
