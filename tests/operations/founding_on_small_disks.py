"""A process that founds libraries on disks of its own, on which ever more files go.

    unshare -rm python -m tests.operations.founding_on_small_disks FOLDER

The disks end with the process. Writes one JSON list: for each disk what was said ("" for nothing), whether a library
stands, whether the machine uses it, and how many approvers it then has.
"""

import json
import os
import subprocess
import sys
from pathlib import Path

from clinicalc.errors import ClinicalcError
from clinicalc.library.cards import write_card
from clinicalc.operations import practice_founding
from clinicalc.operations.course import Course
from clinicalc.operations.signing_keys import Signer
from clinicalc.operations.vetting_desk import VettingDesk
from clinicalc.settings import read_settings
from tests.library.keys_at_hand import PASSPHRASE, key_file
from tests.operations.practice_kit import NOON


def found_everywhere(folder: Path) -> list[tuple[str, bool, bool, int]]:
    """Found a library with one approver on disks that take 2 files, then 3, and so on."""
    key_file(folder / "practice.key", "Tarnwick Northgate")
    write_card(folder / "ada.json", key_file(folder / "ada.key"))
    person = practice_founding.approver_of(folder / "ada.json", "GP partner")
    disk = folder / "disk"
    disk.mkdir()
    told = []
    for files in range(2, 14):
        os.environ["CLINICALC_SETTINGS"] = str(folder / f"settings-{files}")
        subprocess.run(["mount", "-t", "tmpfs", "-o", f"nr_inodes={files}", "tmpfs", str(disk)], check=True)
        said, place = "", disk / "library"
        try:
            signer = Signer(folder / "practice.key", PASSPHRASE)
            practice_founding.found(place, "Tarnwick Northgate", signer, (person,), moment=NOON)
        except ClinicalcError as refused:
            said = str(refused)
        used = bool(read_settings().settings.practice_key)
        approvers = len(VettingDesk(clock=lambda: NOON).read(Course()).approvers) if used else 0
        told.append((said, (place / "library.json").exists(), used, approvers))
        subprocess.run(["umount", str(disk)], check=True)
    return told


if __name__ == "__main__":
    sys.stdout.write(json.dumps(found_everywhere(Path(sys.argv[1]))))
