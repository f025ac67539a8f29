"""keepclear values: stiffness, mass, inertia and orders from dimensions, by the handbook."""

import argparse
import json
from functools import partial
from typing import Any

from modalview.cli.cautions import CAUTION
from modalview.cli.printing import OK, say, say_json
from modalview.cli.table import table, wrapped
from modalview.handbook.catalogue import GROUPS, recipe
from modalview.handbook.handed import file_entry
from modalview.handbook.recipe import Made, Recipe
from modalview.handbook.sizes import RecipeInput

Document = dict[str, Any]
JSON_HELP = "print JSON: SI, with the unit beside"


def prepare(parser: argparse.ArgumentParser) -> None:
    """Declare the words of the command; those of an entry are known once it is named."""
    parser.usage = f'{parser.prog} [-h] [--json] [ENTRY [--SIZE "VALUE" ...]]'
    parser.add_argument("--json", action="store_true", help=JSON_HELP)
    parser.add_argument(
        "words",
        nargs=argparse.REMAINDER,
        metavar="ENTRY",
        help="an entry and its sizes; an entry alone tells what it asks for, no entry lists them all",
    )
    parser.set_defaults(run=partial(run, parser))


def run(parser: argparse.ArgumentParser, words: argparse.Namespace) -> int:
    """Print the list of entries, what an entry asks for, or what it makes of sizes."""
    if not words.words:
        _tell(list_document() if words.json else list_text())
        return OK
    entry = recipe(words.words[0])
    sizes = _sizes(parser, entry, words.words[1:])
    as_json = sizes.pop("json") or words.json
    texts = {name: text for name, text in sizes.items() if text is not None}
    if not texts:
        _tell(entry_document(entry) if as_json else entry_text(entry))
        return OK
    made = entry.evaluate(texts)
    _tell(made_document(entry, made) if as_json else made_text(entry, made))
    return OK


def _tell(what: str | Document) -> None:
    if isinstance(what, str):
        say(what)
    else:
        say_json(what)


def _sizes(parser: argparse.ArgumentParser, entry: Recipe, words: list[str]) -> dict[str, Any]:
    """Return the typed sizes by the name of the input, None where not given, and ``json``."""
    sentence = f"{entry.title}: {entry.sentence} {entry.formula}"
    own = type(parser)(prog=f"{parser.prog} {entry.id}", description=sentence, epilog=CAUTION)
    for one in entry.inputs:
        own.add_argument(one.option, dest=one.name, metavar=f'"{one.example}"', help=_asked(one))
    own.add_argument("--json", action="store_true", help=JSON_HELP)
    return vars(own.parse_args(words))


def _asked(one: RecipeInput) -> str:
    """Return what an input is and what may be typed; a per cent sign as argparse wants it."""
    parts = [one.label]
    if one.choices:
        parts.append(f": {', '.join(one.choices)}")
    if one.several:
        parts.append(', parted by ";"')
    if one.default:
        parts.append(f" (default: {one.default})")
    if one.only_checked:
        parts.append(" (only for the check of validity)")
    return "".join(parts).replace("%", "%%")


# --- texts -------------------------------------------------------------------------------------------


def list_text() -> str:
    """Return all entries by what a person looks for."""
    parts = []
    for group, entries in GROUPS.items():
        rows = [[f"  {one.id}", one.title] for one in entries]
        parts.append(f"{group}\n{table(rows)}")
    parts.append(
        wrapped('keepclear values ENTRY tells what an entry asks for, as in "keepclear values coil-spring".')
    )
    return "\n\n".join([*parts, CAUTION])


def entry_text(entry: Recipe) -> str:
    """Return what an entry asks for, and a line that can be run."""
    rows = [[f"  {one.option}", _asked(one).replace("%%", "%"), one.example] for one in entry.inputs]
    needed = [one for one in entry.inputs if not one.default] or entry.inputs
    example = " ".join(f'{one.option} "{one.example}"' for one in needed)
    parts = [
        f"{wrapped(f'{entry.title}: {entry.makes}. {entry.sentence}')}\n\n  {entry.formula}",
        table([["  option", "size", "such as"], *rows]),
        _standing(entry),
        f"Such as:\n  keepclear values {entry.id} {example}",
    ]
    return "\n\n".join([*parts, CAUTION])


def made_text(entry: Recipe, made: Made) -> str:
    """Return the value, what to paste where, and what it rests on."""
    given = dict(made.given)
    rows = [[f"  {one.label}", given[one.name]] for one in entry.inputs if one.name in given]
    parts = [
        f"{entry.title}: {made.text}",
        f"  {entry.formula}\n{table(rows)}" if rows else f"  {entry.formula}",
        f"For a field\n  {made.text}",
        f"For a file\n{_pasted(made)}",
        _standing(entry),
    ]
    if made.notes:
        parts.append("\n".join(wrapped(f"Note: {_sentence(note)}", "  ") for note in made.notes))
    return "\n\n".join([*parts, CAUTION])


def _pasted(made: Made) -> str:
    """Return the file's entry; its lines are not folded, so that it can be pasted."""
    held = file_entry(made)
    text = json.dumps(held, indent=2, ensure_ascii=False)
    named = text if isinstance(held, dict) else f'"order": {text}'
    return "\n".join(f"  {line}" for line in named.splitlines())


def _standing(entry: Recipe) -> str:
    """Return validity, source and tolerance."""
    tolerance = f"±{entry.tolerance}, common practice" if entry.tolerance else "none"
    lines = [
        f"Holds for: {_sentence(entry.validity)}",
        f"Source: {entry.source.citation} ({entry.source.status}).",
        f"Tolerance to carry along: {tolerance}.",
    ]
    return "\n".join(wrapped(line, "  ") for line in lines)


def _sentence(text: str) -> str:
    return f"{text.rstrip('.')}."


# --- documents ---------------------------------------------------------------------------------------


def list_document() -> Document:
    """Return all entries for JSON."""
    return {
        "entries": [
            {"group": group, **entry_document(one)} for group, entries in GROUPS.items() for one in entries
        ]
    }


def entry_document(entry: Recipe) -> Document:
    """Return an entry for JSON."""
    return {
        "by": entry.id,
        "title": entry.title,
        "sentence": entry.sentence,
        "quantity": entry.makes,
        "unit": entry.result.si_unit,
        "formula": entry.formula,
        "validity": entry.validity,
        "source": entry.source.citation,
        "status": entry.source.status,
        "tolerance": entry.tolerance or None,
        "asks": [
            {
                "option": one.option,
                "label": one.label,
                "quantity": one.quantity.name if one.quantity else None,
                "example": one.example,
                "default": one.default or None,
                "choices": list(one.choices),
                "several": one.several,
                "needed": not one.default and not one.only_checked,
            }
            for one in entry.inputs
        ],
    }


def made_document(entry: Recipe, made: Made) -> Document:
    """Return a value made for JSON."""
    return {
        **{key: one for key, one in entry_document(entry).items() if key != "asks"},
        "value": made.text,
        "si": made.si,
        "given": dict(made.given),
        "notes": list(made.notes),
        "for_a_file": file_entry(made),
    }
