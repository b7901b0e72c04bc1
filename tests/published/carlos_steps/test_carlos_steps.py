"""Steps by least squares against the printed ones and the library's records; see SOURCE.md."""

import numpy as np
import pytest

from layout.job.records import load_library_record

PURE_CENTS = 1200 * np.log2([3 / 2, 5 / 4, 6 / 5])
PRINTED = {
    "alpha": ((9, 5, 4), 77.9649896),
    "beta": ((11, 6, 5), 63.8329325),
    "gamma": ((20, 11, 9), 35.0985422),
}


@pytest.mark.parametrize("name", PRINTED)
def test_the_step_is_the_best_one(name):
    counts, printed = PRINTED[name]
    (best,), *_ = np.linalg.lstsq(np.array(counts, float)[:, None], PURE_CENTS, rcond=None)
    step = load_library_record(name).cents(1)
    assert step == pytest.approx(best, abs=5.1e-8)
    assert step == pytest.approx(printed, abs=1.01e-7)


@pytest.mark.parametrize("name", PRINTED)
def test_it_goes_on_without_an_octave(name):
    record = load_library_record(name)
    assert record.period is None
    assert record.last_degree is None
    assert record.cents(40) == pytest.approx(40 * record.cents(1), abs=1e-9)
    assert all(record.interval(k).fraction is None for k in range(1, 60))
