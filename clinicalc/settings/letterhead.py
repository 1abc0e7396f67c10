"""The letterhead: the lines that stand over a print in place of the practice's bare name."""

from clinicalc.settings.faults import fault_of_unseen

MOST_LINES = 4
LONGEST_LINE = 80


def fault_of_letterhead(lines: tuple[str, ...]) -> str:
    """Why the lines cannot be the setting `letterhead`, or ""."""
    if len(lines) > MOST_LINES:
        return f"letterhead has {len(lines)} lines, and at most {MOST_LINES} fit over a print."
    for number, line in enumerate(lines, 1):
        if not line.strip():
            return f"line {number} of letterhead is empty; leave it out."
        if len(line) > LONGEST_LINE:
            return f"line {number} of letterhead has {len(line)} characters, and at most {LONGEST_LINE} fit on a print."
        unseen = fault_of_unseen(line)
        if unseen:
            return f"line {number} of letterhead holds {unseen}"
    return ""
