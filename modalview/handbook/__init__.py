"""The handbook: stiffness, mass, inertia, orders and grades from dimensions, each with its source.

An entry is a ``Recipe``: data and one small function. They stand in modules by what a person looks for, and
``catalogue`` lists them all.
"""
