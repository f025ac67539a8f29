"""The command that makes a model file of two tables."""

import argparse
from pathlib import Path

from modalview.cli.printing import OK, one_line, say
from modalview.errors import FileAccessError, UsageError
from modalview.model.parts import Motion
from modalview.store import save_model
from modalview.store.tables_columns import is_unit
from modalview.store.tables_network import COORDINATES, import_network
from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.table import accepted_spellings

SUFFIX = ".keepclear"
UNITS = (("length", q.LENGTH), ("mass", q.MASS), ("stiffness", q.STIFFNESS))


def prepare(parser: argparse.ArgumentParser) -> None:
    """Add the words of the command."""
    parser.add_argument("--nodes", type=Path, required=True, metavar="nodes.csv", help="a table of nodes")
    parser.add_argument(
        "--springs", type=Path, required=True, metavar="springs.csv", help="a table of springs"
    )
    parser.add_argument(
        "--motion", required=True, choices=[one.value for one in COORDINATES], help="how the nodes move"
    )
    for name, quantity in UNITS:
        about = f"where no heading names the unit of a {name}"
        parser.add_argument(f"--{name}-unit", metavar=quantity.si_unit, help=about)
    parser.add_argument(
        "-o", "--output", type=Path, required=True, metavar=f"OUT{SUFFIX}", help="where the model goes"
    )
    parser.add_argument("--decimal-comma", action="store_true", help='"1,200" is 1.2, where it may be 1200')
    parser.add_argument("--replace", action="store_true", help="write over a file; it is kept as .bak")
    parser.set_defaults(run=run_import)


def run_import(words: argparse.Namespace) -> int:
    """Write a model made of two tables; nothing is written unless all of it was read."""
    target = words.output
    if target.suffix != SUFFIX:
        raise UsageError(f"-o names a model file, such as model{SUFFIX}; found {str(target)!r}")
    if target.exists() and not words.replace:
        raise FileAccessError(f"{target} is there already; choose another name, or say --replace")
    units = _units(words)
    motion, commas = Motion(words.motion), words.decimal_comma
    found = import_network(words.nodes, words.springs, motion, units, commas_decimal=commas)
    save_model(found.model, target, known=None)
    model = found.model
    parts = [
        _counted(len(model.bodies), "node", "nodes") + " with mass",
        f"{len(model.supports)} on the ground",
        _counted(len(model.links), "spring", "springs"),
    ]
    say(f"{one_line(str(target))} written: {', '.join(parts)}, {model.motion}")
    for note in found.notes:
        say(note)
    say("It has no machine yet: add its speed, orders and the margin wanted before a check.")
    return OK


def _units(words: argparse.Namespace) -> dict[Quantity, str]:
    found = {}
    for name, quantity in UNITS:
        unit = getattr(words, f"{name}_unit")
        if unit is None:
            continue
        if not is_unit(unit, quantity):
            known = ", ".join(accepted_spellings(quantity))
            raise UsageError(f"--{name}-unit: {unit!r} is no unit of {name}; write one of {known}")
        found[quantity] = unit
    return found


def _counted(number: int, one: str, many: str) -> str:
    return f"{number} {one if number == 1 else many}"
