"""What a value from the handbook looks like in a file, so that it can be opened and made again."""

from modalview.handbook.catalogue import recipe
from modalview.handbook.recipe import Made

FileEntry = str | int | float | dict[str, str | dict[str, str]]


def file_entry(made: Made) -> FileEntry:
    """Return what stands in a file for a value made: with ``by`` and ``given``; an order is a bare number.

    ``recipe(by).evaluate(given)`` makes the same value again.

    >>> made = recipe("cable-middle").evaluate({"tension": "500 N", "length": "1.6 m"})
    >>> file_entry(made)["value"], file_entry(made)["given"]
    ('1.25 N/mm', {'tension': '500 N', 'length': '1.6 m'})
    """
    if recipe(made.by).written == "order":
        number = float(made.text)
        return int(number) if number.is_integer() else number
    carried = {"tolerance": made.tolerance} if made.tolerance else {}
    return {"value": made.text, **carried, "source": made.source, "by": made.by, "given": dict(made.given)}
