"""Forced response: steady motion and forces under the excitations of a model, with its damping."""
