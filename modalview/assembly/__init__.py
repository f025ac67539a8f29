"""From the drawn model to terms, coordinates and the pencil (K, M, C)."""
