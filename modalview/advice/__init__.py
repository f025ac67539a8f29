"""What an engineer would doubt about a model: hints that block nothing, each with what it would mean."""
