"""What a publisher does with a key and a coefficient file."""

import os
from pathlib import Path

from clinicalc.assessment.proof import prove_model
from clinicalc.coefficients.reader import ReadFile, read_file
from clinicalc.coefficients.writer import write_file
from clinicalc.errors import KeyRefused, UsageError
from clinicalc.library.cards import read_card_file
from clinicalc.library.file_signatures import sign_file
from clinicalc.library.key_files import read_card
from clinicalc.library.keys import KeyCard, SigningKey


def prepare_signing(path: Path, out: Path | None) -> ReadFile:
    """The file to sign, read once and proved, before any passphrase is asked.

    Raises CoefficientFileRefused for a file that may not be used, UsageError where `out` is there already.
    """
    if out is not None and os.path.lexists(out):
        raise UsageError(f"{out} is there already and was left as it is.", do="Choose another name.")
    read = read_file(path)
    prove_model(read)
    return read


def write_signed(read: ReadFile, key: SigningKey, path: Path) -> int:
    """Put the file with the key's signature at `path`, whole or not at all; how many signatures it carries.

    Raises SignatureRefused where this key has signed it already, FileNotWritten.
    """
    signed = sign_file(read, key)
    write_file(path.resolve(), signed)  # where it is a link, the link stays
    return len(signed.signatures)


def read_any_card(path: Path) -> KeyCard:
    """The card in a card's file, or that of a private key's file. Raises KeyRefused where it is neither."""
    try:
        return read_card_file(path)
    except KeyRefused as as_card:
        try:
            return read_card(path)
        except KeyRefused:
            raise as_card from None
