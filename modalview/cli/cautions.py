"""The one line of caution under every result."""

CAUTION = "A screening aid. It does not replace local codes or a licensed engineer's review."
