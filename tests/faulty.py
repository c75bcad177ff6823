"""Documents with known faults, and what has to be said of each of them.

``FAULTY`` is read by the tests of the reader and by those of the command, so
that a fault has the same sentence in both. To add a case, add a row.
"""

import copy
import json
from dataclasses import dataclass
from typing import Any

# Three planes of P^5 that meet two by two in a point.
PLANES = [
    [[1, 0, 0, 0, 0, 0], [0, 1, 0, 0, 0, 0], [0, 0, 1, 0, 0, 0]],
    [[1, 0, 0, 0, 0, 0], [0, 0, 0, 1, 0, 0], [0, 0, 0, 0, 1, 0]],
    [[0, 1, 0, 0, 0, 0], [0, 0, 0, 1, 0, 0], [0, 0, 0, 0, 0, 1]],
]

_ABSENT = object()


def document(*path: Any, value: Any = _ABSENT, **keys: Any) -> dict[str, Any]:
    """A valid document over Q; with a path, the value put there (or what stood there removed)."""
    made = {"kind": "planes", "field": "Q", "planes": copy.deepcopy(PLANES), **keys}
    if path:
        *parents, last = path
        place: Any = made
        for step in parents:
            place = place[step]
        if value is _ABSENT:
            del place[last]
        else:
            place[last] = value
    return made


def as_text(planes: Any, *, between: str = " ", after_row: str = "\n", after: str = "\n") -> str:
    """Planes as plain text."""
    blocks = ("".join(between.join(map(str, row)) + after_row for row in p) for p in planes)
    return after.join(blocks)


@dataclass(frozen=True)
class Faulty:
    """A document, the field it is read in, and for each fault its place and words of it."""

    name: str
    content: str
    faults: tuple[tuple[str, ...], ...]
    field: str | None = None


def _with(
    name: str, *path: Any, value: Any = _ABSENT, says: tuple[str, ...], **keys: Any
) -> Faulty:
    return Faulty(name, json.dumps(document(*path, value=value, **keys)), (says,))


def _entry(name: str, literal: str, *words: str, field: str = "Q") -> Faulty:
    """One wrong entry, written into the document as it stands."""
    content = json.dumps(document("planes", 1, 2, 4, value="HERE", field=field))
    says = ("planes[1] row 2 entry 4", *words)
    return Faulty(name, content.replace('"HERE"', literal), (says,))


_E012_PLUS_E345 = [1] + [0] * 18 + [1]

_KINDS = [
    _with("an unknown kind", "kind", value="plane", says=("", "'plane'", '"planes"')),
    _with("a kind that is a list", "kind", value=["planes"], says=("", "kind", "['planes']")),
    _with("a kind that is an object", "kind", value={"planes": 1}, says=("", "kind", "planes")),
    _with("a kind that is null", "kind", value=None, says=("", "kind", '"planes"')),
    _with("no kind", "kind", says=("", 'no "kind"', '"planes"')),
    _with("no field", "field", says=("", 'no "field"', "--field")),
    Faulty("a list", "[1, 2, 3]", (("", '"kind"'),)),
    Faulty("a text", '"planes"', (("", '"kind"'),)),
]

_FIELDS = [
    _with(f"the field {value!r}", "field", value=value, says=("field", word))
    for value, word in [
        ("R", "'R'"),
        ("GF(7)", "'GF(7)'"),
        ("Z/7", "'Z/7'"),
        ("", "''"),
        ("F_6", "6"),
        ("F_1", "1"),
        ("F_0", "0"),
        ("F_9223372036854775837", "9223372036854775837"),  # the least prime above 2^63
        ({"characteristic": 4}, "4 is not a prime"),
        ({"characteristic": 15}, "15 is not a prime"),
        ({"characteristic": "7"}, "7"),
        ({"order": 7}, "order"),
        ({}, "{}"),
        (7, "7"),
        (["Q"], "Q"),
        (True, "rue"),
    ]
]

_SHAPES = [
    *(
        _with(
            f"dimension {value!r}",
            "dimension",
            value=value,
            says=("dimension", "6 or 7", json.dumps(value).strip('"')),
        )
        for value in (5, 8, -6, "6", 6.0, True, [6])
    ),
    _with("no planes", "planes", says=("planes", "at least one", "absent")),
    _with("an empty list of planes", "planes", value=[], says=("planes", "at least one", "[]")),
    _with("planes that are a number", "planes", value=3, says=("planes", "list", "3")),
    _with("a plane that is a number", "planes", 1, value=3, says=("planes[1]", "3 rows", "not 3")),
    _with("a plane without rows", "planes", 1, value=[], says=("planes[1]", "3 rows", "not []")),
    _with("two rows", "planes", 1, 2, says=("planes[1]", "3 rows", "not 2")),
    _with("four rows", "planes", 1, value=[[1] * 6] * 4, says=("planes[1]", "3 rows", "not 4")),
    _with(
        "five columns in one row",
        *("planes", 1, 2),
        value=[0, 0, 0, 0, 1],
        says=("planes[1] row 2", "6 entries", "not 5"),
    ),
    _with(
        "seven columns in one row",
        *("planes", 2, 0),
        value=[0, 0, 0, 0, 0, 0, 1],
        says=("planes[2] row 0", "6 entries", "not 7", '"dimension": 7'),
    ),
    _with(
        "a row that is a number", "planes", 1, 2, value=5, says=("planes[1] row 2", "list", "not 5")
    ),
    _with(
        "a Plücker vector with 19 entries",
        *("planes", 1),
        value=[1] + [0] * 18,
        says=("planes[1]", "20 entries", "not 19"),
    ),
    _with(
        "a Plücker vector of P^6 in P^5",
        *("planes", 1),
        value=[1] + [0] * 34,
        says=("planes[1]", "20 entries", "not 35"),
    ),
    _with("labels that are a number", "labels", value=3, says=("labels", "list of texts")),
    _with("labels that are numbers", "labels", value=[1, 2, 3], says=("labels", "texts")),
    _with("two labels", "labels", value=["a", "b"], says=("labels", "2 labels", "3 planes")),
    _with("a title that is a number", "title", value=3, says=("title", "text", "not 3")),
    _with("a source that is a list", "source", value=["a"], says=("source", "text")),
]

_RANKS = [
    _with(
        f"rows with {relation}",
        *("planes", 1),
        value=rows,
        says=("planes[1]", "independent", relation, "basis"),
    )
    for relation, rows in [
        ("row 2 = row 0 + row 1", [[1, 2, 0, 0, 0, 0], [0, 0, 1, 0, 0, 0], [1, 2, 1, 0, 0, 0]]),
        ("row 2 = row 0 − 2·row 1", [[1, 2, 0, 0, 0, 0], [0, 0, 1, 0, 0, 0], [1, 2, -2, 0, 0, 0]]),
        ("row 1 = 1/2·row 0", [[2, 2, 0, 0, 0, 0], [1, 1, 0, 0, 0, 0], [0, 0, 0, 0, 0, 1]]),
        ("row 1 = −row 0", [[2, 2, 0, 0, 0, 0], [-2, -2, 0, 0, 0, 0], [0, 0, 0, 0, 0, 1]]),
        ("row 0 = 0", [[0, 0, 0, 0, 0, 0], [1, 1, 0, 0, 0, 0], [0, 0, 0, 0, 0, 1]]),
        ("row 2 = 0", [[0, 0, 0, 0, 0, 1], [1, 1, 0, 0, 0, 0], [0, 0, 0, 0, 0, 0]]),
    ]
]

_DECOMPOSABLE = [
    _with(
        "e012 + e345 as a plane",
        *("planes", 1),
        value=_E012_PLUS_E345,
        says=("planes[1]", "decomposable", "x012·x345", "= 1, not 0"),
    ),
    _with("zero as a plane", "planes", 1, value=[0] * 20, says=("planes[1]", "zero", "no plane")),
]

_ENTRIES = [
    _entry("a float", "1.5", "1.5", "float"),
    _entry("a float that is an integer", "1.0", "1.0", "float"),
    _entry("a float with an exponent", "1e3", "1e3", "float"),
    _entry("NaN", "NaN", "NaN"),
    _entry("infinity", "Infinity", "Infinity"),
    _entry("minus infinity", "-Infinity", "-Infinity"),
    _entry("NaN as a text", '"NaN"', "'NaN'"),
    _entry("a decimal as a text", '"1.5"', "'1.5'"),
    _entry("true", "true", "true", "boolean"),
    _entry("false", "false", "false", "boolean"),
    _entry("null", "null", "null"),
    _entry("a word", '"one"', "'one'"),
    _entry("an empty text", '""', "''"),
    _entry("two signs", '"--1"', "'--1'"),
    _entry("a plus and a minus sign", '"+-1"', "'+-1'"),
    _entry("a denominator that is zero", '"1/0"', "'1/0'", "0"),
    _entry("a denominator that is zero modulo 7", '"1/14"', "'1/14'", "7", field="F_7"),
    _entry("a float over F_7", "0.5", "0.5", "float", field="F_7"),
    _entry("a list as an entry", "[1]", "[1]"),
    _entry("an object as an entry", '{"1": 2}', "1"),
]

_SEVERAL = [
    Faulty(
        "a float and a missing column",
        json.dumps({**document("planes", 0, 1, 5), "labels": ["a"]}, separators=(",", ":")).replace(
            "[[0,1,0,0,0,0],[0,0,0,1", "[[0,1,0,0.5,0,0],[0,0,0,1"
        ),
        (
            ("labels", "1 labels", "3 planes"),
            ("planes[0] row 1", "6 entries", "not 5"),
            ("planes[2] row 0 entry 3", "0.5", "float"),
        ),
    ),
    Faulty(
        "a wrong kind, field and dimension",
        json.dumps(document(kind="points", field="R", dimension=4)),
        (("", "'points'"), ("field", "'R'"), ("dimension", "not 4")),
    ),
    Faulty(
        "dependent rows and a trivector that is no plane",
        json.dumps(document(planes=[[[1] * 6] * 3, PLANES[0], _E012_PLUS_E345])),
        (("planes[0]", "row 1 = row 0"), ("planes[2]", "decomposable", "not 0")),
    ),
    Faulty(
        "a zero denominator modulo 7, and another one",
        json.dumps(
            document(planes=[PLANES[0], [["1/7", 0, 0, 0, 0, "2/21"], *PLANES[1][1:]]], field="F_7")
        ),
        (("planes[1] row 0 entry 0", "'1/7'"), ("planes[1] row 0 entry 5", "'2/21'")),
    ),
]

_SYNTAX = [
    Faulty("nothing", "", (("", "empty"),)),
    Faulty("blanks only", " \n\t\n", (("", "empty"),)),
    Faulty("an object that ends early", '{"kind": "planes",', (("line 1 column 19", "JSON"),)),
    Faulty("a missing comma", '{"kind": "planes"\n "field": "Q"}', (("line 2 column 2", "JSON"),)),
    Faulty("two documents", '{"kind": 1}\n{}', (("line 2 column 1", "JSON"),)),
    Faulty("brackets without end", "[" * 100_000, (("", "nested too deeply"),)),
    Faulty("brackets in brackets", "[" * 20_000 + "]" * 20_000, (("", "nested too deeply"),)),
    Faulty("objects in objects", '{"a":' * 100_000, (("", "nested too deeply"),)),
    Faulty(
        "a key twice",
        '{"kind": "planes", "field": "Q", "kind": "planes", "planes": []}',
        (("", "'kind'", "twice"),),
    ),
    Faulty(
        "a key twice inside",
        '{"kind": "planes", "field": {"modulus": "x", "modulus": "x"}}',
        (("", "'modulus'", "twice"),),
    ),
    Faulty("prose", "These are my planes.", (("", "--field"),)),
]

_TEXT = [
    Faulty("text without a field", as_text(PLANES), (("", "--field"),)),
    Faulty("prose with a field", "These are my planes.", (("line 1", "4 entries"),), "Q"),
    Faulty("comments only", "# nothing\n# here\n", (("", "no numbers"),), "Q"),
    Faulty("rows of five", "1 0 0 0 0\n", (("line 1", "5 entries", "6 or 7"),), "Q"),
    Faulty(
        "a ragged row after a comment",
        "# one\n1 0 0 0 0 0\n0 1 0 0 0\n0 0 1 0 0 0\n",
        (("line 3", "6 entries", "not 5"),),
        "Q",
    ),
    Faulty(
        "a block of two rows",
        "1 0 0 0 0 0\n0 1 0 0 0 0\n\n" + as_text(PLANES),
        (("lines 1–2", "3 rows", "not 2", "blank lines"),),
        "Q",
    ),
    Faulty(
        "a block of one row",
        as_text(PLANES) + "\n\n1 0 0 0 0 0\n",
        (("line 14", "3 rows", "not 1", "blank lines"),),
        "Q",
    ),
    Faulty(
        "planes without blank lines",
        as_text(PLANES, after=""),
        (("lines 1–9", "3 rows", "not 9", "blank lines"),),
        "Q",
    ),
    Faulty(
        "dependent rows",
        as_text([PLANES[0], [[1, 0, 0, 0, 0, 1], [0, 1, 0, 0, 0, 0], [2, 1, 0, 0, 0, 2]]]),
        (("plane at line 5", "row 2 = 2·row 0 + row 1"),),
        "Q",
    ),
    Faulty(
        "a word, a float and a zero denominator",
        as_text(
            [PLANES[0], [["x", 1, 0, 0, 0, 0], [0, "1.5", 1, 0, 0, 0], [0, 0, "1/0", 0, 1, 0]]]
        ),
        (
            ("line 5 entry 0", "'x'"),
            ("line 6 entry 1", "'1.5'"),
            ("line 7 entry 2", "'1/0'"),
        ),
        "Q",
    ),
    Faulty(
        "a zero denominator modulo 7 in plain text",
        as_text([PLANES[0], [["1/7", 0, 0, 0, 0, 0], *PLANES[1][1:]]]),
        (("line 5 entry 0", "'1/7'", "7"),),
        "F_7",
    ),
    Faulty(
        "a Plücker vector that is no plane",
        "\n" + " ".join(map(str, _E012_PLUS_E345)) + "\n",
        (("line 2", "x012·x345", "= 1, not 0"),),
        "Q",
    ),
    Faulty(
        "planes of P^5 and of P^6",
        as_text([PLANES[0]]) + "\n" + "1 0 0 0 0 0 0\n0 1 0 0 0 0 0\n0 0 1 0 0 0 0\n",
        tuple((f"line {number}", "6 entries", "not 7") for number in (5, 6, 7)),
        "Q",
    ),
    Faulty("rows with brackets", "[1 0 0 0 0 0]", (("line 1 column 4", "JSON"),), "Q"),
]

_CONFLICTS = [
    Faulty(
        "a trivector that cannot be reduced modulo 7",
        json.dumps({"kind": "trivectors", "field": "Q", "trivectors": [["3/14"] + [0] * 19]}),
        (("", "3/14", "7"),),
        "F_7",
    ),
    Faulty(
        "F_7 read over Q", json.dumps(document(field="F_7")), (("field", "F_7", "over Q"),), "Q"
    ),
    Faulty(
        "F_7 read over F_5", json.dumps(document(field="F_7")), (("field", "F_7", "F_5"),), "F_5"
    ),
]

FAULTY = [
    *_KINDS,
    *_FIELDS,
    *_SHAPES,
    *_RANKS,
    *_DECOMPOSABLE,
    *_ENTRIES,
    *_SEVERAL,
    *_SYNTAX,
    *_TEXT,
    *_CONFLICTS,
]
