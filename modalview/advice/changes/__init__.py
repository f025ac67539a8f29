"""Changes that clear a model: windows of values, placement, least change, tolerances to narrow; as options."""
