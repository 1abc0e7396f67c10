"""The approval record of one model as the contents of a print: what was approved, by whom, and what that rests on."""

from collections.abc import Iterator

from clinicalc.assessment.numerals import percent_in_full
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.library.approving import say_signature
from clinicalc.library.file_signatures import FileSignature
from clinicalc.library.history import followed, in_chain_order
from clinicalc.library.installing import Candidate
from clinicalc.library.keys import group_key_id
from clinicalc.library.opening import OpenedLibrary
from clinicalc.library.records import Installed
from clinicalc.library.standing import Approval, ModelState, SealedRecord, Standing
from clinicalc.operations.library_history import KNOWN_BY, tell_history
from clinicalc.operations.library_words import say_standing
from clinicalc.operations.model_checks import list_checks
from clinicalc.operations.open_figures import list_open_figures
from clinicalc.operations.vetting_furniture import NO_AUTHORITY, NOT_THE_PAPER, furnish, say_reading, say_written
from clinicalc.report.contents import Block, Fact, FactList, Prose, Section, SignatureLine
from clinicalc.report.phrases import count_words, moment_words, zone_words
from clinicalc.report.vetting_sheet import DigestRow, OpenFigureRow, VettingSheet
from clinicalc.report.vetting_tables import lay_digests, lay_open_figures
from clinicalc.units.days import day_words

_NO_NUMBER = "Not in use: this model gives no number"
_UNNAMED = "A file without a record of its installation"
_TO_KNOW = "To know: "
_UNSIGNED = "Nobody signed the file. An approval then takes its whole fingerprint, typed as its publisher stated it."
_SIGNED = (
    SignatureLine(("Approver’s signature", "Name", "Date")),
    SignatureLine(("Second signature", "Name", "Date")),
)


def compose_approval(
    opened: OpenedLibrary, state: ModelState, candidate: Candidate | None, file_fault: str
) -> VettingSheet:
    """Everything for the practice's folder; where the file cannot be used, `file_fault` stands in the place of it."""
    named = f"{state.title or _UNNAMED} {state.version}".strip()
    in_use = state.standing is Standing.IN_USE
    sections = (
        _approval(state),
        _model(state, candidate),
        _installation(state),
        *_checks(candidate, file_fault),
        *_open_figures(state, candidate),
        *_cautions(candidate),
        _story(state),
        *_faults(state),
        _records(opened, state),
        Section("Before you rely on it", (Prose((NOT_THE_PAPER, NO_AUTHORITY)), *_SIGNED), whole=True),
    )
    return VettingSheet(
        kind="Approval record",
        title=named,
        about=f"Approval record of {named}",
        lines=say_reading(opened),
        says=say_standing(state),
        sections=sections,
        furniture=furnish(
            named,
            opened.authority.practice,
            model=named,
            fingerprint=state.fingerprint,
            strip="" if in_use else _NO_NUMBER,
            caution=NO_AUTHORITY,
        ),
    )


def _approval(state: ModelState) -> Section:
    approval = state.approval
    if approval is None:
        return Section("Approval", (Prose(("No approval is in force.",)),), whole=True)
    return Section("Approval", (FactList(tuple(_said(approval))),))


def _said(approval: Approval) -> Iterator[Fact]:
    written = approval.written.astimezone()
    also = ("Approved by its author: this person also made or brought the file, as the policy of the time allowed.",)
    who = f"{approval.name}, {approval.role}"
    yield Fact("Approved by", (who, *(also if approval.by_author else ())), strong=True)
    yield Fact("Written", (f"{moment_words(written)} {zone_words(written)}, by the writer’s own clock",))
    yield Fact("To be reviewed by", (f"{day_words(approval.review_until)}, the last day on which it gives a number",))
    yield Fact("Reason", (approval.reason,))
    yield Fact("Recalibration", (approval.recalibration or "none: as published",))
    points = tuple(
        f"{percent_in_full(point.probability)}: {point.label} ({point.source})" for point in approval.decision_points
    )
    if approval.known_by is not None:
        yield Fact("File known by", (KNOWN_BY[approval.known_by],))
    yield Fact("Decision points", points or ("none of the practice’s own",))


def _model(state: ModelState, candidate: Candidate | None) -> Section:
    digits = group_fingerprint(state.fingerprint)
    facts = [
        Fact("Title", (state.title or _UNNAMED,), strong=True),
        Fact("Id and version", (f"{state.id} {state.version}".strip() or "not known",)),
        Fact("Fingerprint", (digits[:39], digits[40:])),
    ]
    if candidate is not None:
        model, content = candidate.model, candidate.model.content
        facts += [
            Fact("Outcome", (content.outcome,)),
            Fact("Horizons", (", ".join(span.words for span in model.spans),)),
            Fact("Made for", (content.use.population, content.use.setting)),
        ]
    return Section("The model", (FactList(tuple(facts)),))


def _installation(state: ModelState) -> Section:
    found = [(s, s.record.statement) for s in state.records if isinstance(s.record.statement, Installed)]
    facts = []
    for sealed, said in found:
        day, time = say_written(sealed.record.written)
        who = f"{sealed.record.name}, {sealed.record.role}"
        facts += [Fact("Installed by", (who, f"{day}, {time}".rstrip(", "))), Fact("From", (said.came_from,))]
    blocks: tuple[Block, ...] = (FactList(tuple(facts)),) if facts else (Prose(("No record says who installed it.",)),)
    return Section("Installation", blocks)


def _checks(candidate: Candidate | None, file_fault: str) -> Iterator[Section]:
    if candidate is None:
        said = f"The file cannot be used, and nothing of it was checked. {file_fault}"
        yield Section("Checks of the file", (Prose((said,)),))
        return
    checks = list_checks(candidate)
    schema = Fact("Form and rules", ("every figure and text is as the format wants it",))
    passed = tuple(Fact(check.name, (check.says,)) for check in checks if check.ok)
    yield Section("Checks that passed on this machine", (FactList((schema, *passed)),))
    open_still = tuple(Fact(check.name, (check.says,)) for check in checks if not check.ok)
    if open_still:
        yield Section("To know of the file", (FactList(open_still),), whole=True)
    worth = tuple(_say_signed(signature) for signature in candidate.signatures)
    yield Section("Signatures on the file, and what they are worth on this machine", (Prose(worth or (_UNSIGNED,)),))


def _say_signed(signature: FileSignature) -> str:
    """What a signature is worth here, with the whole id of its key."""
    key = f" The id of its key: {group_key_id(signature.key)}." if signature.key else ""
    return f"{say_signature(signature)}{key}"


def _open_figures(state: ModelState, candidate: Candidate | None) -> Iterator[Section]:
    if candidate is None:
        return
    compared = () if state.approval is None else state.approval.compared
    figures = list_open_figures(candidate.model.content, compared)
    heading = "Figures that the file calls unconfirmed"
    if not figures:
        yield Section(heading, (Prose(("None.",)),), whole=True)
        return
    rows = tuple(OpenFigureRow(f.what, f.at, f.figure, f.why, f.check_against, f.compared_by) for f in figures)
    count = count_words(len(rows), "entry", "entries")
    open_still = sum(not row.by for row in rows)
    rest = f"{open_still} not compared by anybody yet" if open_still else "all compared, as the approval says"
    yield Section(f"{heading}: {count}, {rest}", (lay_open_figures(rows),))


def _cautions(candidate: Candidate | None) -> Iterator[Section]:
    if candidate is not None:
        use = candidate.model.content.use
        facts = (
            Fact("Cautions", use.cautions or ("none stated",)),
            Fact("Not for", ("; ".join(use.not_for) or "nothing stated",)),
            Fact("Does not use", ("; ".join(use.not_used) or "nothing stated",)),
        )
        yield Section("What the file itself says of its use", (FactList(facts),))


def _story(state: ModelState) -> Section:
    """Everything that was said of it so far, each record in one paragraph."""
    told: list[str] = []
    for line in tell_history(state):
        if line.startswith(" ") and told:
            told[-1] += f"{'' if told[-1].endswith('.') else '.'} {line.strip()}"
        else:
            told.append(line)
    return Section("Everything said of it so far", (Prose(tuple(told) or ("Nothing.",)),))


def _faults(state: ModelState) -> Iterator[Section]:
    said = tuple(dict.fromkeys(f"{'' if f.stops else _TO_KNOW}{f.sentence}" for f in state.faults))
    if said:
        yield Section("Found wrong with its records", (Prose(said),))


def _records(opened: OpenedLibrary, state: ModelState) -> Section:
    approval = state.approval
    given = {sealed.digest: sealed for sealed in (*opened.authority.records, *state.records)}
    wanted = given if approval is None else _behind(approval.digest, given)
    rows = tuple(_digest_row(sealed) for sealed in in_chain_order(wanted.values()))
    key = group_fingerprint(opened.authority.practice_key)
    said = "Each record is signed and names those it follows by their whole digests, back to the founding."
    pinned = FactList((Fact("Practice key, as pinned", (key[:39], key[40:])),))
    which = "Records about it and about the library" if approval is None else "Records that the approval rests on"
    return Section(which, (Prose((said,)), pinned, lay_digests(rows)))


def _behind(digest: str, given: dict[str, SealedRecord]) -> dict[str, SealedRecord]:
    """A record with everything that it follows, however far back."""
    found: dict[str, SealedRecord] = {}
    waiting = [digest]
    while waiting:
        one = waiting.pop()
        if one in given and one not in found:
            found[one] = given[one]
            waiting += followed(given[one])
    return found


def _digest_row(sealed: SealedRecord) -> DigestRow:
    record = sealed.record
    kind = str(record.statement.__struct_config__.tag).replace("_", " ").capitalize()
    day, time = say_written(record.written)
    return DigestRow(f"{kind}, {record.name}", f"{day} {time}".rstrip(), group_fingerprint(sealed.digest))
