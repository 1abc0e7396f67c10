"""Refusals of the library room in the words of the window: no commands, no options, but what stands on the screen."""

import copy

from clinicalc.errors import ClinicalcError, CoefficientFileRefused

_WORDS = (
    # studies
    ('Say model = "FILE.json" in it, or --model FILE.json.', 'Say model = "FILE.json" in it, and open it again.'),
    # deeds
    (
        "or trust the publisher first: clinicalc trust add.",
        "or trust the publisher first, in Settings.",
    ),
    ("type it with --fingerprint", "type it on the model’s card under “Fingerprint you were given”"),
    ("Approve it instead: clinicalc library approve.", "Approve it instead."),
    ("Choose one of them with --recalibration.", "Choose one of them."),
    ("Choose the practice’s with --recalibration.", "Choose the practice’s."),
    ("Leave --recalibration out.", "Choose none."),
    ("Choose another name, or give --replace.", "Choose another name."),
    (
        "Choose another name, or say --replace to replace it.",
        "Choose another name, or name it with “Choose…”, which asks whether it is to be replaced.",
    ),
    (
        "or have the policy changed with the practice key: clinicalc library policy --author-may-approve.",
        "or have the policy changed with the practice key, under “Library…”, “People of the practice…”.",
    ),
    ("Connect it; or, to make a new library, name its folder with --library.", "Connect it, and try again."),
    # people and keys
    ("`clinicalc trust list` shows the ids.", "The list of publishers, in Settings, shows the ids."),
    ("if it was revoked by mistake, say --again.", "if it was revoked by mistake, say so in the form."),
    ("Let the person make a key with: clinicalc trust make-key.", "Let the person make a key, in Settings."),
    ("Give the file of the practice key with --practice-key.", "Choose the file of the practice key."),
    ("appointed with: clinicalc library appoint.", "appointed under “Library…”, “People of the practice…”."),
    ("clinicalc library list shows the approvers.", "the list of approvers shows it."),
    # a library that was founded and yet is not used
    (" (clinicalc library join PLACE --practice-key-id DIGITS; clinicalc trust card KEYFILE shows the id)", ""),
    ("appoint each with: clinicalc library appoint.", "appoint each under “Library…”, “People of the practice…”."),
    (
        "appoint each person with: clinicalc library appoint.",
        "appoint each person under “Library…”, “People of the practice…”.",
    ),
    # what is wrong with the library
    ("Run clinicalc library verify and settle what it names first.", "Settle this first."),
    ("Settle what clinicalc library verify names first.", "Settle this first."),
    ("Settle this first: clinicalc library verify names everything.", "Settle this first."),
    ("; clinicalc library verify names everything.", "; “Check all files” under “Library…” names everything."),
    ("; clinicalc library verify says it again.", "."),
    ("clinicalc library verify makes the copy anew", "“Check all files” under “Library…” makes the copy anew"),
    ("clinicalc library list shows them all.", "The list of models shows them all."),
    ("Open it once, for instance with: clinicalc library list.", "Open it once."),
    (
        "Name its folder with --library, and join it with: clinicalc library join.",
        "Join one on the Models page.",
    ),
    ("Run clinicalc library join, and", "Join it on the Models page, and"),
    ("clinicalc library join sets this file aside", "Joining the library again sets this file aside"),
    ("join that: clinicalc library join.", "join that: Settings, “Join or found…”."),
)


def say_in_window(error: ClinicalcError) -> ClinicalcError:
    """The same error with its ways out as the window has them."""
    if isinstance(error, CoefficientFileRefused):
        # several problems are listed where there is room for them
        several = len(error.problems) > 1
        do = "What is wrong with it stands under its name." if several else capital(str(error.problems[0]))
        return ClinicalcError(error.what, where=error.where, do=do)
    said = copy.copy(error)
    said.what, said.why, said.do = (replace_commands(part) for part in (error.what, error.why, error.do))
    if "--compared" in said.do:
        said.do = "Have each compared with its source, and write on the model’s card who did."
    return said


def sentence_of(error: ClinicalcError) -> str:
    """An error as a sentence of the window that stands by itself; a place at its head keeps its spelling."""
    words = str(say_in_window(error))
    return words if error.where else capital(words)


def capital(text: str) -> str:
    """A sentence with its first letter capital; a place in the file keeps its spelling."""
    return text if text.startswith("/") else f"{text[:1].upper()}{text[1:]}"


def replace_commands(text: str) -> str:
    """A sentence with the commands in it replaced by what the window has."""
    for command, words in _WORDS:
        text = text.replace(command, words)
    return text
