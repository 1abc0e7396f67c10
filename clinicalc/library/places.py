"""Where everything lies in a library, under which names, and how large it may be."""

import re
from dataclasses import dataclass

from clinicalc.coefficients.reader import MOST_BYTES as MOST_MODEL_BYTES
from clinicalc.library.placing import is_part
from clinicalc.library.sealing import MOST_BYTES as MOST_RECORD_BYTES

__all__ = ["MOST_MODEL_BYTES", "MOST_RECORD_BYTES"]

FOUNDING_FILE = "library.json"
MODELS = "models"
RECORDS = "records"
MOST_FOUNDING_BYTES = 4096

_MODEL = re.compile(r"([0-9a-f]{64})\.json")
_RECORD = re.compile(r"([0-9a-f]{64})-([0-9a-f]{64})\.json")
_LEFT_BY_SYSTEMS = re.compile(
    r"\.DS_Store|Thumbs\.db|ehthumbs\.db|desktop\.ini|\.directory|\._.+|\.nfs[0-9a-fA-F]+|\.fuse_hidden[0-9a-fA-F]+"
    r"|lost\+found|@eaDir|#recycle|\.snapshot|\.Trash(?:es|-\d+)?|\$RECYCLE\.BIN|System Volume Information",
    re.IGNORECASE,
)


@dataclass(frozen=True, slots=True, order=True)
class RecordName:
    """What a record's name says: the fingerprint it is about (64 zeros for the library), and its own digest."""

    about: str
    digest: str

    @property
    def file(self) -> str:
        """The name of its file."""
        return f"{self.about}-{self.digest}.json"

    def __str__(self) -> str:
        """Short enough for a sentence, long enough to be found."""
        return f"{RECORDS}/{self.about[:12]}…-{self.digest[:12]}….json"


def model_file(fingerprint: str) -> str:
    """The name of a model's file."""
    return f"{fingerprint}.json"


def short_model(fingerprint: str) -> str:
    """A model's file, for a sentence."""
    return f"{MODELS}/{fingerprint[:12]}….json"


def read_model_name(file: str) -> str | None:
    """The fingerprint in a file's name, None where it is not the name of a model."""
    found = _MODEL.fullmatch(file)
    return found[1] if found else None


def read_record_name(file: str) -> RecordName | None:
    """What a file's name says, None where it is not the name of a record."""
    found = _RECORD.fullmatch(file)
    return RecordName(found[1], found[2]) if found else None


def is_dropping(file: str) -> bool:
    """Whether a name is of the kind that systems leave everywhere, or that of a file still being written."""
    return is_part(file) or _LEFT_BY_SYSTEMS.fullmatch(file) is not None
