"""Ways of writing one unit, brought to one key: "kg·m²", "kg*m^2" and "m2 kg" are the same."""

import re
from itertools import accumulate

_SAME = str.maketrans(
    {
        "\u00b5": "u",  # micro sign
        "\u03bc": "u",  # Greek mu
        "\u00b2": "2",
        "\u00b3": "3",
        "\u2074": "4",
        "\u00b0": "deg",
        "\u00a0": " ",  # no-break, thin and narrow no-break space
        "\u2009": " ",
        "\u202f": " ",
        "\u22c5": "·",  # dot operator
        "\u207b": "-",
        "\u00b9": "1",
    }
)
# A product sign stands between two units; so may a hyphen or a point, as in "lbf-in" and "N.m".
# Elsewhere they stay and are refused.
_PRODUCT = re.compile(r"(?<=[A-Za-z0-9]) *[*·] *(?=[A-Za-z])|(?<=[A-Za-z0-9])[-.](?=[A-Za-z])")
_POWER = re.compile(r"(?<=[A-Za-z])\^(?=[234](?![0-9])|-1(?![0-9]))")
_GLUED_AFTER = frozenset({"N", "kN", "MN", "kg", "g"})


def unit_key(text: str) -> str:
    """Return the key under which the table holds the unit that ``text`` writes.

    Factors of a product are sorted, capitals aside, so that a mistaken capital can be told; the divisor is
    kept as written.

    >>> unit_key("kg·m²"), unit_key("N*m / rad"), unit_key("in lbf/rad")
    ('kg m2', 'm N/rad', 'in lbf/rad')
    """
    plain = _POWER.sub("", _PRODUCT.sub(" ", text.translate(_SAME)))
    above, *below = plain.split("/")
    parts = (" ".join(sorted(above.split(), key=str.casefold)), *(" ".join(part.split()) for part in below))
    return "/".join(parts)


def glued_spellings(spelling: str) -> tuple[str, ...]:
    """Return how a product is also written without its gaps: "N m s/rad" as "Nm s/rad" and "Nms/rad".

    Only after N and kg with their prefixes, and from the left, so that "N ms" never means newton seconds.

    >>> glued_spellings("N m s/rad")
    ('Nm s/rad', 'Nms/rad')
    >>> glued_spellings("lbf in")
    ()
    """
    above, slash, below = spelling.partition("/")
    factors = above.split(" ")
    if factors[0] not in _GLUED_AFTER:
        return ()
    heads = list(accumulate(factors))[1:]
    return tuple(
        " ".join([head, *factors[count:]]) + slash + below for count, head in enumerate(heads, start=2)
    )
