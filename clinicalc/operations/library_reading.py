"""Reading the library: whole or for one model, with its progress told; every record gathered; as it was on a day."""

from collections.abc import Callable, Collection
from datetime import date, datetime

from clinicalc.errors import UsageError
from clinicalc.library.as_of import AsOf, look_back
from clinicalc.library.finding import find_state
from clinicalc.library.machine import Machine
from clinicalc.library.opening import OpenedLibrary, open_library, verify_all
from clinicalc.library.standing import Fault, SealedRecord
from clinicalc.operations.course import Course

_STEP = 25
"""Progress is told every so many models: telling takes longer than reading one."""


def now() -> datetime:
    """The time of this machine with its zone: a review date ends at midnight here."""
    return datetime.now().astimezone()


def read_library(
    machine: Machine, moment: datetime, course: Course, *, only: Collection[str] | None = None
) -> OpenedLibrary:
    """The library as it stands for this machine, or those models. Raises what `open_library` raises, and Stopped."""
    return open_library(machine, moment, only=only, told=_teller(course))


def read_everything(machine: Machine, moment: datetime, course: Course) -> OpenedLibrary:
    """The same with every file read anew. Raises what `verify_all` raises, and Stopped."""
    return verify_all(machine, moment, told=_teller(course))


def gather(opened: OpenedLibrary) -> tuple[list[SealedRecord], list[Fault]]:
    """Every record that can be read, and every fault of the library and of its models."""
    records: list[SealedRecord] = []
    faults = list(opened.faults)
    found: dict[str, dict[str, SealedRecord]] = {}
    for state in opened.models:
        faults += state.faults
        found[state.fingerprint] = {sealed.digest: sealed for sealed in state.records}
    for about, digests in opened.source.contents().records.items():
        known = found.get(about, {})
        if known.keys() == set(digests):
            records += known.values()
            continue
        # about the library itself, or a record that has no place in a chain, or one that came since
        gathered = opened.source.records(about, digests, freshly=False)
        records += gathered.records
        faults += gathered.faults
    return records, list(dict.fromkeys(faults))


def find_versions(opened: OpenedLibrary, words: str) -> frozenset[str]:
    """The fingerprints of every version of a model id, or of the one model that the words name."""
    versions = frozenset(state.fingerprint for state in opened.models if state.id == words.strip())
    return versions or frozenset({find_state(opened.models, words).fingerprint})


def look_back_on(opened: OpenedLibrary, day: date) -> AsOf:
    """The library at the end of a day. Raises UsageError for one that is still to come."""
    check_past(day, opened.opened_at)
    records, faults = gather(opened)
    return look_back(records, opened.library, opened.machine.practice_key, day, faults)


def check_past(day: date, moment: datetime) -> date:
    """The day itself. Raises UsageError where it is still to come on this machine's clock."""
    today = moment.astimezone().date()
    if day > today:
        raise UsageError(
            f"{day.isoformat()} is still to come; today is {today.isoformat()}.", do="Give a day that is past."
        )
    return day


def _teller(course: Course) -> Callable[[int, int], None]:
    def tell(done: int, of: int) -> None:
        course.go_on()
        if done % _STEP == 0 or done == of:
            course.say("Reading the library’s models", done, of)

    return tell
