"""What the program is: name, version, what it does not claim, hazards thought of, notices for what others made."""

import json
from dataclasses import dataclass
from itertools import groupby

from clinicalc import __version__
from clinicalc.report.phrases import count_words
from clinicalc.resources import read_shipped

PURPOSE = (
    "An offline program for people who use clinical risk models: one coefficient file, one patient, one probability"
    " with its band."
)

NO_APPROVAL = (
    "It claims no approval or certification by any authority. It supports the judgement of qualified clinicians and"
    " does not replace it. It is not for emergencies."
)


@dataclass(frozen=True, slots=True)
class About:
    """What stands on the page about the program."""

    name: str
    version: str
    purpose: str
    no_approval: str
    hazards: str
    notices: str


def read_about() -> About:
    """The page about the program. Raises ShippedFileMissing where this installation lacks the log or the notices."""
    log = json.loads(read_shipped("resources/hazards.json"))
    hazards = count_words(len(log["hazards"]), "hazard")
    pairs = count_words(len(log["overlaps"]), "pair")
    return About(
        name="clinicalc",
        version=__version__,
        purpose=PURPOSE,
        no_approval=NO_APPROVAL,
        hazards=f"Its hazard log holds {hazards}, each with its cause, its control and the test behind it, and names"
        f" {pairs} of units that no check can tell apart by the digits.",
        notices=lay_plainly(read_shipped("resources/THIRD_PARTY.md").decode("utf-8")),
    )


def lay_plainly(text: str) -> str:
    """A text with headings, quotations and tables as plain paragraphs, every word kept; a table row takes one line."""
    kept = (line for line in text.splitlines() if not line.startswith("|--"))
    blocks = [
        "\n".join(lines) for is_empty, lines in groupby(kept, key=lambda line: not line.strip(" >")) if not is_empty
    ]
    return "\n\n".join(_lay_block(block) for block in blocks) + "\n"


def _lay_block(block: str) -> str:
    lines = [line.replace("`", "") for line in block.split("\n")]
    if lines[0].startswith("|"):
        return "\n".join("   ".join(cell.strip() for cell in line.strip("|").split("|")) for line in lines)
    if lines[0].startswith("- "):
        return "\n".join(lines).replace("\n  ", " ")
    return " ".join(line.lstrip("#> ") for line in lines)
