"""What the user drew: frozen parts, their rules and their edits."""
