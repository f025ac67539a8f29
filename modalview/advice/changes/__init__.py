"""Changes that clear a model, as options: windows of values, placed modes, least change, tolerances."""
