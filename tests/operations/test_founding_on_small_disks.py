"""A founding for which the disk has too little room: nothing is there, or what stands is said."""

import json
from pathlib import Path

from tests.library.private_mounts import run_with_own_mounts

STANDS = "the library was founded and this machine uses it, but its approvers were not listed: nobody may approve yet."


def test_a_founding_is_whole_or_not_there_or_says_what_stands(tmp_path: Path) -> None:
    told = run_with_own_mounts("tests.operations.founding_on_small_disks", tmp_path)
    ends = set()
    for said, stands, used, approvers in json.loads(told):
        if not said:
            ends.add("whole")
            assert (stands, used, approvers) == (True, True, 1)
        elif STANDS in said:
            ends.add("without approvers")
            assert (stands, used, approvers) == (True, True, 0)
            assert "Do not found it again" in said
        else:
            ends.add("nothing")
            assert (stands, used, approvers) == (False, False, 0)
    assert ends == {"whole", "without approvers", "nothing"}
