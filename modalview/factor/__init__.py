"""Sparse LDL^T factors of K - sigma M, inertia counts with proven uncertainty, solves."""
