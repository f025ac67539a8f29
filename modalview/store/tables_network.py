"""A table of nodes and a table of springs make a model: masses joined by springs along their lines."""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path

from modalview.errors import Fault, FileFaultsError, UnitError
from modalview.model.parts import FREEDOMS, Body, End, Model, Motion, Spring, Support
from modalview.model.rules import faults as rules_broken
from modalview.model.values import Entry, Value
from modalview.store.reading import MOST_FREEDOMS
from modalview.store.tables import Table, decimal_comma, read_table
from modalview.store.tables_columns import Column, Role, cell_entry, find_columns
from modalview.units import quantities as q
from modalview.units.quantities import Quantity

NODE = "node"
AXES = ("x", "y", "z")
MOST_FAULTS = 1000
# In place of a mass: the node is ground. As an end of a spring in single axis: ground that is not listed.
GROUND = ("fixed", "ground", "support")
# How many coordinates place a node, by the motion; in single axis they only draw it.
COORDINATES = {Motion.SINGLE_AXIS: 2, Motion.PLANE: 2, Motion.SPACE: 3}

NODE_ROLES = (
    Role(NODE, ("node", "id", "node_id", "body", "name", "number", "no", "nr")),
    Role("mass", ("mass", "m"), q.MASS),
)
SPRING_ROLES = (
    Role("first node", ("node_a", "from", "a", "node_1", "node1", "first", "start", "i")),
    Role("second node", ("node_b", "to", "b", "node_2", "node2", "second", "end", "j")),
    Role("stiffness", ("stiffness", "spring_stiffness", "spring_rate", "rate", "k"), q.STIFFNESS),
    Role("name of the spring", ("name", "spring", "id"), required=False),
)


@dataclass(frozen=True, slots=True)
class Imported:
    """A model from tables, and what was done to get it.

    Parameters
    ----------
    model : Model
    notes : tuple of str
        Columns that were not read; commas that were read as decimal.
    """

    model: Model
    notes: tuple[str, ...]


def import_network(
    nodes: Path,
    springs: Path,
    motion: Motion,
    units: Mapping[Quantity, str] | None = None,
    *,
    commas_decimal: bool = False,
) -> Imported:
    """Read a table of nodes and a table of springs as a model.

    Parameters
    ----------
    nodes, springs : Path
        Tables with headings; see the README for those that are known.
    motion : Motion
        "single axis", "plane" or "space". Nodes are points: they have no inertia, so nothing turns.
    units : mapping or None
        Units of length, mass and stiffness where a heading names none.
    commas_decimal : bool
        True reads "1,200" as 1.2, which is refused otherwise.

    Raises
    ------
    FileAccessError
        A table cannot be read.
    FileFaultsError
        With every fault and its row and column; nothing is half imported.
    """
    if motion not in COORDINATES:
        reason = "nodes of a table are points that shift; a shaft train turns. Choose another motion"
        raise FileFaultsError((Fault("motion", reason),))
    known = dict(units or {})
    reader = _Reader(motion, known, commas_decimal)
    node_table, spring_table = read_table(nodes), read_table(springs)
    reader.read_nodes(node_table)
    reader.read_springs(spring_table)
    if reader.faults:
        more = len(reader.faults) - MOST_FAULTS
        last = (Fault("", f"{more} more faults were found; mend these first"),) if more > 0 else ()
        raise FileFaultsError((*reader.faults[:MOST_FAULTS], *last))
    model = Model(
        title=f"{nodes.stem} and {springs.stem}",
        motion=motion,
        bodies=tuple(reader.bodies.values()),
        supports=tuple(reader.supports.values()),
        links=tuple(reader.links),
        assumptions=(f"Imported from {nodes.name} and {springs.name}.", *reader.notes),
    )
    broken = rules_broken(model)
    if broken:
        raise FileFaultsError(broken)
    return Imported(model, tuple(reader.notes))


@dataclass(slots=True)
class _Reader:
    """Collects parts and faults over both tables."""

    motion: Motion
    units: Mapping[Quantity, str]
    commas_decimal: bool
    faults: list[Fault] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)
    bodies: dict[str, Body] = field(default_factory=dict)
    supports: dict[str, Support] = field(default_factory=dict)
    links: list[Spring] = field(default_factory=list)
    rows: dict[str, int] = field(default_factory=dict)

    def read_nodes(self, table: Table) -> None:
        """Read bodies and supports."""
        needed = self.motion is not Motion.SINGLE_AXIS
        axes = AXES[: COORDINATES[self.motion]]
        roles = (*NODE_ROLES, *(Role(axis, (axis,), q.LENGTH, required=needed) for axis in axes))
        try:
            columns, unread = self._columns(table, roles, optional=() if needed else axes)
            _check_number(table, self.motion)
            comma = self._commas(table, [columns[r.name].index for r in roles if self._measures(r, columns)])
        except FileFaultsError as error:
            self.faults += error.faults
            return
        self._note_unread(table, unread)
        placed = all(axis in columns for axis in axes)
        for row, cells in table.rows:
            name = cells[columns[NODE].index]
            self._check_name(table, row, columns[NODE], name)
            position = None
            if placed:
                read = [
                    self._entry(table, (row, cells), columns[axis], q.LENGTH, comma=comma) for axis in axes
                ]
                position = tuple(read)
            if cells[columns["mass"].index].lower() in GROUND:
                self.supports[name] = Support(id=name, position=position)
                continue
            mass = self._entry(table, (row, cells), columns["mass"], q.MASS, comma=comma)
            if mass.si < 0:
                self._fault(table, row, columns["mass"], f'"{mass.text}" is below zero')
            self.bodies[name] = Body(id=name, mass=Value(mass), position=position)

    def read_springs(self, table: Table) -> None:
        """Read springs; what their ends are is known from the nodes."""
        try:
            columns, unread = self._columns(table, SPRING_ROLES)
            comma = self._commas(table, [columns["stiffness"].index])
        except FileFaultsError as error:
            self.faults += error.faults
            return
        self._note_unread(table, unread)
        if self.faults and not self.rows:
            return  # without nodes every end would be a fault
        start = _prefix(self.rows)
        for number, (row, cells) in enumerate(table.rows, 1):
            ends = [self._end(table, row, columns[role.name], cells) for role in SPRING_ROLES[:2]]
            stiffness = self._entry(table, (row, cells), columns["stiffness"], q.STIFFNESS, comma=comma)
            if stiffness.si <= 0:
                self._fault(table, row, columns["stiffness"], f'"{stiffness.text}" is not above zero')
            self._check_ends(table, row, columns["second node"], ends)
            named = columns.get("name of the spring")
            name = cells[named.index] if named else ""
            self.links.append(
                Spring(
                    id=f"{start}{number}",
                    name=name or None,
                    from_=ends[0],
                    to=ends[1],
                    stiffness=Value(stiffness),
                )
            )

    def _columns(
        self, table: Table, roles: tuple[Role, ...], optional: tuple[str, ...] = ()
    ) -> tuple[dict[str, Column], tuple[str, ...]]:
        try:
            return find_columns(table, roles, self.units)
        except FileFaultsError:
            # Coordinates that only draw may lack their unit: then nothing is drawn from them.
            plain = tuple(role for role in roles if role.name not in optional)
            if len(plain) == len(roles):
                raise
            return find_columns(table, plain, self.units)

    def _commas(self, table: Table, columns: Sequence[int]) -> bool:
        """Tell whether commas in these columns are decimal signs, and note it."""
        cell = decimal_comma(table, columns, told=self.commas_decimal)
        if cell:
            read_as = cell.replace(",", ".")
            self.notes.append(f"Commas in {table.name} are read as decimal: {cell} is {read_as}.")
        return bool(cell)

    def _measures(self, role: Role, columns: Mapping[str, Column]) -> bool:
        return role.quantity is not None and role.name in columns

    def _note_unread(self, table: Table, unread: tuple[str, ...]) -> None:
        if unread:
            self.notes.append(f"Not read from {table.name}: {', '.join(unread)}.")

    def _check_name(self, table: Table, row: int, column: Column, name: str) -> None:
        if not name:
            self._fault(table, row, column, "is empty; every node needs a name or a number of its own")
        elif name in self.rows:
            self._fault(table, row, column, f'"{name}" is already the node of row {self.rows[name]}')
        self.rows.setdefault(name, row)

    def _end(self, table: Table, row: int, column: Column, cells: tuple[str, ...]) -> End:
        name = cells[column.index]
        if name in self.bodies:
            return End(body=name)
        if name not in self.supports:
            if name.lower() in GROUND and self.motion is Motion.SINGLE_AXIS:
                self.supports[name] = Support(id=name)
            else:
                self._fault(
                    table, row, column, f'there is no node "{name}"' if name else "is empty; name a node"
                )
        return End(support=name)

    def _check_ends(self, table: Table, row: int, column: Column, ends: list[End]) -> None:
        first, second = (end.body or end.support for end in ends)
        if first == second:
            self._fault(table, row, column, f'both ends are the node "{second}"; a spring joins two')
        elif self.motion is not Motion.SINGLE_AXIS and not self._apart(ends):
            reason = (
                f'the nodes "{first}" and "{second}" are at one place; the spring has no line to act along'
            )
            self._fault(table, row, column, reason)

    def _apart(self, ends: list[End]) -> bool:
        places = []
        for end in ends:
            part = self.bodies.get(end.body or "") or self.supports.get(end.support or "")
            if part is None or part.position is None:
                return True  # told elsewhere
            places.append([entry.si for entry in part.position])
        return math.dist(*places) > 0 or any(math.isnan(one) for place in places for one in place)

    def _entry(
        self,
        table: Table,
        line: tuple[int, tuple[str, ...]],
        column: Column,
        quantity: Quantity,
        *,
        comma: bool,
    ) -> Entry:
        row, cells = line
        try:
            return cell_entry(cells[column.index], column.unit, quantity, comma=comma)
        except UnitError as error:
            self._fault(table, row, column, str(error))
            return Entry("", math.nan)

    def _fault(self, table: Table, row: int, column: Column, reason: str) -> None:
        self.faults.append(Fault(table.place(row, column.index), reason))


def _check_number(table: Table, motion: Motion) -> None:
    most = MOST_FREEDOMS // len(FREEDOMS[motion])
    if len(table.rows) > most:
        reason = f"has {len(table.rows)} nodes; at most {most} make a model in {motion}"
        raise FileFaultsError((Fault(table.name, reason),))


def _prefix(names: Mapping[str, int]) -> str:
    """Return a start for the ids of springs with which no node's name starts."""
    start = "s"
    while any(name.startswith(start) for name in names):
        start += "_"
    return start
