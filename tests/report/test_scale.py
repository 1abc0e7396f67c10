"""The ruler's scale: places on the link, uneven ticks, labels that keep apart, and when it becomes the wide one."""

from itertools import pairwise

import pytest

from clinicalc.prediction.links import Link
from clinicalc.report.fonts import read_lettering
from clinicalc.report.scale import Scale, TickSize, choose_scale, on_link

LINKS: tuple[Link, ...] = ("cloglog", "logit")
MAJORS = [0.5, 1, 2, 5, 10, 20, 40, 60, 80]


def distance(scale: Scale, lower: float, upper: float) -> float:
    return scale.position(upper) - scale.position(lower)


# by hand: (log(-log(1 - b)) - log(-log(1 - a))) / (log(-log 0.2) - log(-log 0.995)) * 436
@pytest.mark.parametrize(("lower", "upper", "pixels"), [(0.01, 0.02, 53), (0.10, 0.20, 57), (0.50, 0.60, 21)])
def test_a_point_of_probability_takes_more_room_where_it_is_rare(lower: float, upper: float, pixels: int) -> None:
    assert round(distance(Scale("cloglog", 436), lower, upper)) == pixels


# by hand: logit 0.02 - logit 0.01 = 0.70330, logit 0.8 - logit 0.005 = 6.67960; 436 * 0.70330 / 6.67960 = 45.907
def test_the_logit_has_its_own_places() -> None:
    assert distance(Scale("logit", 436), 0.01, 0.02) == pytest.approx(45.907, abs=0.001)


@pytest.mark.parametrize("link", LINKS)
@pytest.mark.parametrize("wide", [False, True])
def test_both_ends_stand_at_the_ends_and_what_is_beyond_stands_there_too(link: Link, wide: bool) -> None:
    scale = Scale(link, 436, wide=wide, left=15)
    low, high = scale.ends
    assert (low, high) == ((0.0005, 0.99) if wide else (0.005, 0.8))
    assert [scale.position(p) for p in (0.0, low / 2, low)] == [15.0] * 3
    assert [scale.position(p) for p in (high, (1 + high) / 2, 1.0)] == [pytest.approx(451.0)] * 3
    assert [scale.side(p) for p in (0.0, low, 0.3, high, 1.0)] == [-1, 0, 0, 0, 1]


@pytest.mark.parametrize("link", LINKS)
def test_equal_steps_on_the_link_are_equal_lengths(link: Link) -> None:
    scale = Scale(link, 500)
    places = {p: (scale.position(p), on_link(link, p)) for p in (0.01, 0.05, 0.2, 0.6)}
    slopes = [(x2 - x1) / (e2 - e1) for (x1, e1), (x2, e2) in pairwise(places.values())]
    assert slopes == pytest.approx([slopes[0]] * 3)


@pytest.mark.parametrize("link", LINKS)
@pytest.mark.parametrize("wide", [False, True])
@pytest.mark.parametrize("width", [220, 436, 700])
def test_no_two_ticks_are_closer_than_allowed_and_they_are_uneven(link: Link, wide: bool, width: float) -> None:
    ticks = Scale(link, width, wide=wide).ticks()
    gaps = [right.x - left.x for left, right in pairwise(ticks)]
    assert min(gaps) >= 2.6
    majors = [tick.x for tick in ticks if tick.size is TickSize.MAJOR]
    steps = [right - left for left, right in pairwise(majors)]
    assert max(steps) > 1.4 * min(steps)


def test_the_ticks_of_the_scale_that_every_patient_has() -> None:
    ticks = Scale("cloglog", 436).ticks()

    def percents(size: TickSize) -> list[float]:
        return [round(100 * tick.probability, 2) for tick in ticks if tick.size is size]

    assert percents(TickSize.MAJOR) == MAJORS
    assert percents(TickSize.MIDDLE) == [1.5, 3, 4, 6, 7, 8, 9, 15, 30, 50, 70]
    minors = percents(TickSize.MINOR)
    assert [p for p in minors if p < 1] == [0.6, 0.7, 0.8, 0.9]
    assert [p for p in minors if 2 < p < 3] == [2.2, 2.4, 2.6, 2.8]
    assert [p for p in minors if 5 < p < 7] == [5.5, 6.5]
    assert [p for p in minors if 10 < p < 15] == [11, 12, 13, 14]
    assert [p for p in minors if 20 < p < 30] == [22, 24, 26, 28]


def test_small_ticks_between_two_greater_ones_are_all_there_or_none() -> None:
    narrow = {tick.probability for tick in Scale("cloglog", 220).ticks()}
    full = {tick.probability for tick in Scale("cloglog", 436).ticks()}
    assert narrow < full
    between = {p for p in full if 0.5 < p < 0.6}
    assert len(between) == 4
    assert not between & narrow


def texts(scale: Scale, size: float = 13.0) -> list[str]:
    return [label.text for label in scale.labels(read_lettering().width, size)]


def test_labels_at_the_width_of_the_page() -> None:
    assert texts(Scale("cloglog", 436)) == ["0.5", "1", "2", "5", "10", "20", "30", "40", "50", "60", "80"]
    wide = texts(Scale("cloglog", 470, wide=True))
    assert wide == ["0.05", "0.1", "0.2", "0.5", "1", "2", "5", "10", "20", "40", "60", "80", "99"]


@pytest.mark.parametrize("link", LINKS)
@pytest.mark.parametrize("wide", [False, True])
@pytest.mark.parametrize("size", [9.0, 13.0, 26.0])
def test_labels_keep_apart_and_both_ends_are_always_labelled(link: Link, wide: bool, size: float) -> None:
    measure = read_lettering().width
    labels = Scale(link, 330, wide=wide).labels(measure, size)
    for left, right in pairwise(labels):
        halves = (measure(left.text, size) + measure(right.text, size)) / 2
        assert right.x - left.x - halves >= 7.0
    assert (labels[0].text, labels[-1].text) == (("0.05", "99") if wide else ("0.5", "80"))


def test_fifty_goes_before_thirty_and_both_before_any_other() -> None:
    kept = [set(texts(Scale("cloglog", width))) for width in range(500, 330, -5)]
    majors = {f"{major:g}" for major in MAJORS}
    assert {"30", "50"} <= kept[0]
    assert any("30" in labels and "50" not in labels for labels in kept)
    for labels in kept:
        assert majors <= labels or "50" not in labels


@pytest.mark.parametrize(
    ("probabilities", "wide"),
    [
        ((), False),
        ((0.122, 0.09, 0.16), False),
        ((0.005, 0.8), False),
        ((0.0049,), True),
        ((0.01, 0.004, 0.02), True),
        ((0.7, 0.6, 0.801), True),
        ((0.0001,), True),
    ],
)
def test_the_wide_scale_only_where_something_leaves_the_other(probabilities: tuple[float, ...], wide: bool) -> None:
    scale = choose_scale("cloglog", 436, *probabilities, left=15)
    assert (scale.wide, scale.left, scale.width) == (wide, 15, 436)
    assert scale.words == ("0.05 to 99\u202f%" if wide else "0.5 to 80\u202f%")
