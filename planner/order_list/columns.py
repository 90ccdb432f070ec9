"""Which column of a list holds what: the names makers give to columns, in plain words."""

import re
import unicodedata
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from types import MappingProxyType
from typing import Literal, get_args

from planner.order_list.cells import listed, one_line, shown
from planner.order_list.limits import OrderListError

Field = Literal[
    "for_whom",
    "pattern",
    "colourway",
    "size",
    "ending",
    "quantity",
    "due_date",
    "note",
    "distinct_lengths",
    "matched_set",
]

DEFAULT_ORDER: tuple[Field, ...] = get_args(Field)
"""The order of the columns in the grid."""

UNNAMED_ORDER: tuple[Field, ...] = DEFAULT_ORDER[: DEFAULT_ORDER.index("note") + 1]
"""The order in a list without column names: a comma in a note must not become another field."""

FIELD_LABELS: Mapping[Field, str] = MappingProxyType(
    {
        "for_whom": "for whom",
        "pattern": "pattern",
        "colourway": "colourway",
        "size": "size",
        "ending": "ending",
        "quantity": "quantity",
        "due_date": "due date",
        "note": "note",
        "distinct_lengths": "lengths",
        "matched_set": "set",
    }
)

_REQUIRED: tuple[Field, ...] = ("pattern", "size")

# English, German, French, Dutch, Spanish, in this order. Words that could mean two fields are left
# out ("nombre" is a name in Spanish and a number in French; "number" may be an order's own number):
# better a column that is reported as not read than one that is read wrongly.
_SYNONYMS: Mapping[Field, str] = {
    "for_whom": "for, for whom, whom, who, who for, customer, client, name, person, buyer, "
    "ordered by, für, für wen, Kunde, Kundin, Käufer, pour, pour qui, nom, "
    "voor, voor wie, klant, naam, para, para quién, cliente",
    "pattern": "pattern, patterns, pattern name, design, motif, bracelet, Muster, Armband, "
    "modèle, dessin, patroon, ontwerp, armband, patrón, diseño, dibujo, pulsera",
    "colourway": "colourway, colorway, colour, color, colours, colors, shades, "
    "Farbe, Farben, Farbstellung, couleur, couleurs, coloris, kleur, kleuren, colores",
    "size": "size, sizes, wrist, wrist size, girth, Größe, Groesse, Handgelenk, taille, poignet, "
    "maat, pols, talla, tamaño, muñeca",
    "ending": "ending, endings, closure, end, ends, finish, tie, ties, Abschluss, Verschluss, Ende, "
    "fermeture, finition, fin, sluiting, einde, afwerking, cierre, final",
    "quantity": "quantity, qty, pieces, pcs, how many, count, Anzahl, Menge, Stück, "
    "Stueck, Stückzahl, quantité, combien, pièces, aantal, stuks, hoeveel, cantidad, "
    "piezas, cuántos, cuántas",
    "due_date": "due, due date, by, date, when, needed by, ready by, wanted by, fällig, Termin, bis, "
    "Datum, échéance, pour le, datum, uiterlijk, fecha, fecha de entrega, entrega",
    "note": "note, notes, remark, remarks, comment, comments, Notiz, Bemerkung, Anmerkung, remarque, "
    "opmerking, notitie, nota, notas, observación, observaciones",
    "distinct_lengths": "lengths, distinct lengths, cut lengths, lengths to cut, how many lengths, Längen, "
    "longueurs, lengtes, largos",
    "matched_set": "set, matched set, matched, matching set, set name, Satz, zusammen, ensemble, "
    "assortis, stel, bij elkaar, juego, conjunto",
}


def plain_name(text: str) -> str:
    """Reduce a column name to what counts in it.

    Parameters
    ----------
    text
        The name.

    Returns
    -------
    str
        Its letters and digits, without case and accents.
    """
    decomposed = unicodedata.normalize("NFKD", text).casefold()
    return "".join(character for character in decomposed if character.isalnum())


_FIELD_BY_NAME: Mapping[str, Field] = {
    plain_name(name): field for field, names in _SYNONYMS.items() for name in names.split(",")
}
_LONGEST_NAME = 60


@dataclass(frozen=True)
class Columns:
    """What each column of a list holds, `None` where it is not read.

    Raises
    ------
    OrderListError
        When a field stands twice, or pattern or size is missing.
    """

    fields: tuple[Field | None, ...]
    names: tuple[str, ...]

    def __post_init__(self) -> None:
        if len(self.fields) != len(self.names):
            raise ValueError("every column needs a name")
        self._check_once()
        self._check_required()

    @property
    def ignored(self) -> tuple[str, ...]:
        """The names of the columns that are not read."""
        return tuple(name for field, name in self._named() if field is None)

    def _check_once(self) -> None:
        for field in DEFAULT_ORDER:
            doubles = [shown(name) for read, name in self._named() if read == field]
            if len(doubles) > 1:
                raise OrderListError(
                    f"The list has {len(doubles)} columns for the {FIELD_LABELS[field]}: "
                    f"{listed(doubles)}. Keep one of them, or rename the others."
                )

    def _check_required(self) -> None:
        missing = [FIELD_LABELS[field] for field in _REQUIRED if field not in self.fields]
        if missing:
            found = [shown(name) for name in self.names]
            raise OrderListError(
                f"The list has no column for the {' and the '.join(missing)}; "
                f"its columns are {listed(found, most=10)}. Name one {' and one '.join(missing)}."
            )

    def _named(self) -> tuple[tuple[Field | None, str], ...]:
        return tuple(zip(self.fields, self.names, strict=True))


def field_named(name: str) -> Field | None:
    """Tell which field a column name stands for.

    Parameters
    ----------
    name
        A cell of the first row. Case, accents, spaces and punctuation do not matter, nor does
        what stands in brackets after the name.

    Returns
    -------
    str or None
        One of `DEFAULT_ORDER`, or `None` when no field is called so.
    """
    if len(name) > _LONGEST_NAME:
        return None
    before_brackets = re.split(r"[(\[]", name, maxsplit=1)[0]
    return _FIELD_BY_NAME.get(plain_name(name)) or _FIELD_BY_NAME.get(plain_name(before_brackets))


def count_named(cells: Sequence[str]) -> int:
    """Count the cells of a row that are column names.

    Parameters
    ----------
    cells
        The row.

    Returns
    -------
    int
        The number of cells that name a field.
    """
    return sum(field_named(cell) is not None for cell in cells)


def read_columns(header: Sequence[str] | None) -> Columns:
    """Find out what each column of a list holds.

    Parameters
    ----------
    header
        The column names, or `None` for a list without them, which is read in `UNNAMED_ORDER`.

    Returns
    -------
    Columns
        One field, or `None`, for every column.

    Raises
    ------
    OrderListError
        When two columns name the same field, or there is none for the pattern or the size.
    """
    if header is None:
        return Columns(UNNAMED_ORDER, tuple(FIELD_LABELS[field] for field in UNNAMED_ORDER))
    names = (one_line(name) or f"column {number}" for number, name in enumerate(header, start=1))
    return Columns(tuple(field_named(name) for name in header), tuple(names))
