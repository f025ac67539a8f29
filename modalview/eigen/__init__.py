"""The solve: modes of a pencil with error bounds and evidence that none is missing."""
