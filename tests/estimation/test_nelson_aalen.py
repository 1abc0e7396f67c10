"""Nelson and Aalen: by hand, and against the sum written out."""

import numpy as np
import pytest

from clinicalc.estimation.nelson_aalen import find_hazards


def test_people_with_ties_and_late_entry_by_hand() -> None:
    """Events at 2 (one of 4 at risk) and 3 (two of 4, the one entering at 2 among them); who enters at 3 is not."""
    times = np.array([1.0, 2.0, 3.0, 3.0, 5.0, 4.0, 6.0])
    events = np.array([False, True, True, True, False, False, False])
    entry = np.array([0.0, 0.0, 0.0, 0.0, 0.0, 2.0, 3.0])
    found = find_hazards(times, events, entry)
    assert found == pytest.approx([0, 1 / 4, 1 / 4 + 2 / 4, 1 / 4 + 2 / 4, 1 / 4 + 2 / 4, 2 / 4, 0], abs=1e-15)


def test_many_people_against_the_sum_written_out() -> None:
    rng = np.random.default_rng(2)
    entry = rng.integers(0, 10, 200).astype(np.float64)
    times = entry + rng.integers(1, 20, 200)
    events = rng.random(200) < 0.6
    summed = [
        sum(
            (events & (times == at)).sum() / ((entry < at) & (times >= at)).sum()
            for at in np.unique(times[events])
            if begin < at <= end
        )
        for begin, end in zip(entry, times, strict=True)
    ]
    assert find_hazards(times, events, entry) == pytest.approx(summed, rel=1e-12, abs=1e-15)
