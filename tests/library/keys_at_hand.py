"""Keys for tests: made from fixed secret bytes, so that ids and signatures are the same in every run."""

import hashlib
from pathlib import Path

from clinicalc.library.key_files import make_key
from clinicalc.library.keys import KeyCard, SigningKey, signing_key

PASSPHRASE = "four words nobody guesses"
LOW_COST = 2**4


def key_of(name: str) -> SigningKey:
    """A key that belongs to this name only; its secret is the name's digest, so it is worth nothing."""
    return signing_key(hashlib.sha256(name.encode()).digest(), name)


def key_file(path: Path, name: str = "Dr Ada Tarn") -> KeyCard:
    """A key file at `path`, sealed by PASSPHRASE at a cost that does not hold a test up."""
    return make_key(path, name, PASSPHRASE, cost=LOW_COST)
