"""Workers elsewhere give the same samples: processes of this machine, and a cluster where it is installed."""

import sys

import numpy as np
import pytest

from modalview.errors import InputError
from modalview.places import demo_models
from modalview.store import read_model
from modalview.study.sampling import sample
from modalview.study.vary_results import SampleRequest
from modalview.study.workers import cluster_workers, local_workers

PUMP = read_model(demo_models() / "1-cooling-water-pump" / "as-built.keepclear")


def test_a_number_of_workers_that_is_none():
    with pytest.raises(InputError, match="workers: 1 to 1024; found 0"), local_workers(0):
        pass


def test_cluster_without_its_library(monkeypatch):
    monkeypatch.setitem(sys.modules, "distributed", None)
    with pytest.raises(InputError, match=r'pip install "keepclear\[cluster\]"'), cluster_workers("tcp://x:1"):
        pass


@pytest.mark.slow
def test_processes_give_the_same_samples():
    alone = sample(SampleRequest(PUMP, samples=20_001))
    with local_workers(2) as executor:
        beside = sample(SampleRequest(PUMP, samples=20_001, executor=executor))
    assert np.array_equal(alone.frequencies_hz, beside.frequencies_hz)


@pytest.mark.slow
@pytest.mark.filterwarnings("default")  # of a library that is not ours
def test_cluster_gives_the_same_samples():
    distributed = pytest.importorskip("distributed")
    alone = sample(SampleRequest(PUMP, samples=20_001))
    with (
        distributed.LocalCluster(n_workers=2, threads_per_worker=1, dashboard_address=None) as cluster,
        cluster_workers(cluster.scheduler_address) as executor,
    ):
        beside = sample(SampleRequest(PUMP, samples=20_001, executor=executor))
    assert np.array_equal(alone.frequencies_hz, beside.frequencies_hz)


@pytest.mark.slow
@pytest.mark.filterwarnings("default")
def test_no_cluster_at_the_address():
    pytest.importorskip("distributed")
    with (
        pytest.raises(InputError, match=r"No cluster answers at tcp://127\.0\.0\.1:9"),
        cluster_workers("tcp://127.0.0.1:9"),
    ):
        pass
