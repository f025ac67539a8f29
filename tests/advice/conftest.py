"""Small models written as a file is, and the doubts about them."""

import json

import pytest

from modalview.advice.drawn import doubts
from modalview.store import parse_model


@pytest.fixture
def model():
    """Return a function that makes a model of its lists of parts."""

    def make(motion="plane", *, bodies=(), links=(), supports=(), **more):
        document = {"format": "keepclear", "version": 1, "title": "t", "motion": motion, **more}
        document |= {"bodies": list(bodies), "supports": list(supports), "links": list(links)}
        return parse_model(json.dumps(document))

    return make


@pytest.fixture
def told(model):
    """Return a function that gives the doubts of one rule about such a model."""

    def tell(rule, *given, **parts):
        return [one for one in doubts(model(*given, **parts)) if one.rule == rule]

    return tell
