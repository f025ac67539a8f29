"""Drawing by hand on the sheet: tools, what is chosen, numbers beside a drag, forms beside a part."""
