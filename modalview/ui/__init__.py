"""The window: shows what the study found and turns what a person does into edits."""
