"""`library verify`: every record, every signature and every file of the library, end to end."""

import click

from clinicalc.cli.library_session import library_options, now, tell
from clinicalc.cli.outcome import ExitStatus
from clinicalc.report.phrases import count_words


@click.command(short_help="Verify every record and every file, end to end.")
@library_options
def verify(place: str | None, as_json: bool) -> int:
    """Verify the library end to end; each fault is a line, and the exit status is 6 where one of them stops a model.

    Every record is read anew and its signature verified, the chain is followed from the founding record, what this
    machine has seen before is looked for, and the worked examples of every file are recomputed.
    """
    from clinicalc.library.machine import this_machine
    from clinicalc.library.opening import verify_all
    from clinicalc.operations.library_check import check_library

    opened = verify_all(this_machine(place), now())
    checked = check_library(opened)
    stops = any(fault.stops for fault in checked.faults)
    record = {
        "library": opened.authority.library,
        "place": str(opened.place),
        "reachable": opened.reachable,
        "records": checked.records,
        "models": checked.models,
        "faults": [
            {
                "kind": fault.kind.value,
                "about": fault.about,
                "record": fault.record or None,
                "says": fault.sentence,
                "stops": fault.stops,
            }
            for fault in checked.faults
        ],
        "sound": not stops,
    }
    lines = [f"{'Stops' if fault.stops else 'To know'}: {fault.sentence}" for fault in checked.faults]
    well = "Nothing here stops a model." if checked.faults else "Everything agrees."
    verdict = "Something here stops a model, as named above." if stops else well
    counted = f"{count_words(checked.records, 'record')} and {count_words(checked.models, 'model')}"
    tell(as_json, record, (*lines, f"{counted} verified. {verdict}"))
    return ExitStatus.LIBRARY if stops else ExitStatus.ASSESSED
