"""The way of people into a fit: nothing outside its boxes, every figure in it, and the same in words."""

from itertools import pairwise

import pytest

from clinicalc.report.flow_figure import Flow, FlowSize, Leaving, Stage, draw_flow
from clinicalc.report.fonts import read_lettering
from clinicalc.report.shapes import Rect, Text

FLOW = Flow(
    (
        Stage(
            5000, "people in the file", (Leaving(86, "Systolic blood pressure missing"), Leaving(1234, "eGFR missing"))
        ),
        Stage(3680, "used, nothing missing; 522 with the event"),
    )
)
LONG = Flow(
    (
        Stage(12, "people " * 30, (Leaving(3, "a reason " * 20),), ("A note that is long. " * 9,)),
        Stage(9, "used"),
    )
)


@pytest.mark.parametrize("flow", [FLOW, LONG])
def test_every_text_stands_within_a_box(flow: Flow) -> None:
    measure = read_lettering().width
    drawn = draw_flow(flow, FlowSize(510.0, 9.5), measure)
    boxes = [shape for shape in drawn.shapes if isinstance(shape, Rect)]
    texts = [shape for shape in drawn.shapes if isinstance(shape, Text)]
    assert len(boxes) == 3
    for text in texts:
        wide = measure(text.text, text.size, text.weight)
        left = text.left(wide)
        assert any(
            box.x <= left and left + wide <= box.x + box.width
            and box.y <= text.y - 0.7 * text.size and text.y + 0.2 * text.size <= box.y + box.height
            for box in boxes
        ), text  # fmt: skip
    for box in boxes:
        assert box.x >= 0
        assert box.x + box.width <= 510.0
        assert box.y + box.height <= drawn.height
    for first, second in pairwise(boxes):
        assert first.y + first.height < second.y


def test_the_figures_stand_in_the_sentence_and_in_the_table() -> None:
    drawn = draw_flow(FLOW, FlowSize(510.0, 9.5), read_lettering().width)
    assert drawn.sentence == (
        "5,000 people in the file; left: 86 Systolic blood pressure missing; left: 1,234 eGFR missing;"
        " 3,680 used, nothing missing; 522 with the event"
    )
    assert drawn.table[2] == ("86", "left out: Systolic blood pressure missing")
    written = [shape.text for shape in drawn.shapes if isinstance(shape, Text)]
    for figure in ("5,000", "86", "1,234", "3,680"):
        assert figure in written


def test_nobody_left() -> None:
    drawn = draw_flow(Flow((Stage(2, "people"), Stage(2, "used"))), FlowSize(510.0, 9.5), read_lettering().width)
    assert len([shape for shape in drawn.shapes if isinstance(shape, Rect)]) == 2
