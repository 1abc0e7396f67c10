"""The group `library`: what a practice has approved for use at the bedside, and who said so."""

import click

from clinicalc.cli.library_decisions import approve, comment, extend, hold, release, withdraw
from clinicalc.cli.library_founding import init, join
from clinicalc.cli.library_history import as_of, history
from clinicalc.cli.library_models import install, list_models, show
from clinicalc.cli.library_moving import compare_entries, diff, export, import_
from clinicalc.cli.library_people import appoint, dismiss, policy, revoke_key
from clinicalc.cli.library_verify import verify


@click.group(short_help="What the practice has approved, by whom and until when.")
def library() -> None:
    """The practice's model library: install, approve, withdraw and verify coefficient files.

    The folder is taken from --library, else from CLINICALC_LIBRARY, else from the settings of this machine.

    Exit status: 0 done, 2 a word of the call is wrong, 3 two entries differ, 4 a coefficient file is refused,
    5 something failed, 6 the library, a record or a key is refused.
    """


for _command in (
    init,
    join,
    appoint,
    dismiss,
    revoke_key,
    policy,
    install,
    list_models,
    show,
    approve,
    extend,
    withdraw,
    comment,
    hold,
    release,
    verify,
    history,
    as_of,
    diff,
    compare_entries,
    export,
    import_,
):
    library.add_command(_command)
