"""The one door to the core: a frozen request in, a frozen result with its evidence out."""
