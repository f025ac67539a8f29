"""Which damping holds, and loss factors of modes."""

import json

import numpy as np
import pytest

from modalview.assembly.assemble import assemble
from modalview.eigen.solve import find_modes
from modalview.response.damping import damping_of, damping_sentence, modal_losses
from modalview.store import parse_model


def assembly(*, loss=(None, None), dashpot=None, **more):
    def link(name, one, other, eta, k):
        ends = {"from": {"body": one}, "to": {"support": "g"} if other == "g" else {"body": other}}
        given = {"id": name, "kind": "spring", **ends, "stiffness": f"{k} N/m"}
        return given | ({"loss_factor": eta} if eta else {})

    links = [link("k", "a", "g", loss[0], 4000.0), link("l", "a", "b", loss[1], 900.0)]
    if dashpot is not None:
        links.append(
            {"id": "c", "kind": "damper", "from": {"body": "a"}, "to": {"support": "g"}, "damping": dashpot}
        )
    tree = {
        "format": "keepclear",
        "version": 1,
        "title": "t",
        "motion": "single axis",
        "bodies": [{"id": "a", "mass": "10 kg"}, {"id": "b", "mass": "3 kg"}],
        "supports": [{"id": "g"}],
        "links": links,
        **more,
    }
    return assemble(parse_model(json.dumps(tree)))


RATIO = {"damping": {"ratio": "2 %"}}


@pytest.mark.parametrize(
    ("given", "kind"),
    [
        ({}, "none"),
        ({"damping": {"ratio": "0 %"}}, "none"),
        (RATIO, "modal ratio"),
        ({"damping": {"alpha": "0.3 1/s"}}, "proportional"),
        ({"loss": ("3 %", None)} | RATIO, "loss factors"),
        ({"dashpot": "5 N s/m"} | RATIO, "dashpots"),
        ({"dashpot": "0 N s/m"} | RATIO, "modal ratio"),
        ({"dashpot": "5 N s/m", "loss": (None, "1 %")}, "dashpots and loss factors"),
    ],
)
def test_which_damping_holds(given, kind):
    found = damping_of(assembly(**given))
    assert found.kind == kind


def test_what_is_ignored_is_said():
    for given in ({"loss": ("3 %", None)}, {"dashpot": "5 N s/m"}):
        with_both = assembly(**given, **RATIO)
        assert "is ignored" in damping_sentence(with_both, damping_of(with_both))
        alone = assembly(**given)
        assert "ignored" not in damping_sentence(alone, damping_of(alone))
    ratio = assembly(**RATIO)
    assert damping_sentence(ratio, damping_of(ratio)).startswith("Damping ratio 2 % for every mode")
    none = assembly()
    assert "infinite" in damping_sentence(none, damping_of(none))


def test_half_and_double_multiply_every_kind():
    found = damping_of(assembly(loss=("3 %", "1 %"), dashpot="5 N s/m")).multiplied(2.0)
    assert found.times == 2.0
    assert found.losses.tolist() == [0.06, 0.02]
    found = damping_of(assembly(damping={"alpha": "0.3 1/s", "beta": "0.01 s"})).multiplied(0.5)
    assert (found.alpha, found.beta) == (0.15, 0.005)


def test_loss_factors_of_modes_are_weighted_by_strain_energy():
    """With one loss factor for all springs exact; else between the smallest and the largest."""
    same = assembly(loss=("4 %", "4 %"))
    modes = find_modes(same.pencil())
    assert modal_losses(same.pencil(), modes, damping_of(same).losses) == pytest.approx([0.04, 0.04])
    own = assembly(loss=("4 %", "1 %"))
    modes = find_modes(own.pencil())
    found = modal_losses(own.pencil(), modes, damping_of(own).losses)
    stretch = modes.shapes.T @ np.array([[1.0, 1.0], [0.0, -1.0]])
    energy = np.array([4000.0, 900.0]) * stretch**2
    assert found == pytest.approx(energy @ [0.04, 0.01] / energy.sum(axis=1), rel=1e-12)


def test_light_loss_factors_agree_with_the_decay_of_the_complex_stiffness():
    """Approximate: the imaginary part of lambda over its real part is the loss factor to second order."""
    own = assembly(loss=("1 %", "0.2 %"))
    modes = find_modes(own.pencil())
    found = modal_losses(own.pencil(), modes, damping_of(own).losses)
    k, l_ = 4000 * (1 + 0.01j), 900 * (1 + 0.002j)
    squared = np.linalg.eigvals(np.array([[(k + l_) / 10, -l_ / 10], [-l_ / 3, l_ / 3]]))
    exact = squared[np.argsort(squared.real)]
    assert found == pytest.approx(exact.imag / exact.real, rel=1e-3)
