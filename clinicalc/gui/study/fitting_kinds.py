"""What the form of a fit offers with each kind: covariances, penalties, and how ties are taken."""

KINDS: tuple[tuple[str, str | None], ...] = (
    ("Cox, times to an event", "cox"),
    ("Fine–Gray, times to an event with competing events", "fine-gray"),
    ("logistic", "logistic"),
    ("complementary log-log", "cloglog"),
)
TIES: tuple[tuple[str, str | None], ...] = (("Efron", "efron"), ("Breslow", "breslow"))
NO_PENALTY = "none"
_MODEL, _ROBUST, _BY_GROUPS = (
    ("of the model", "model"),
    ("robust (sandwich)", "robust"),
    ("robust, by groups of people", "cluster"),
)
_NONE, _FIRTH, _RIDGE = (
    ("none", NO_PENALTY),
    ("Firth’s, for sparse data", "firth"),
    ("ridge, which shrinks the coefficients", "ridge"),
)

Entries = tuple[tuple[str, str | None], ...]


def covariances_of(kind: str, penalty: str = NO_PENALTY) -> Entries:
    """The covariances of a kind of fit with a penalty: those that are valid for it."""
    if penalty == "firth":
        return (_MODEL,)
    return (_ROBUST, _BY_GROUPS) if kind == "fine-gray" else (_MODEL, _ROBUST, _BY_GROUPS)


def penalties_of(kind: str) -> Entries:
    """The penalties of a kind of fit, none among them; only that where it takes none."""
    if kind == "logistic":
        return (_NONE, _FIRTH, _RIDGE)
    return (_NONE, _RIDGE) if kind == "cox" else (_NONE,)


def usual_ties(kind: str) -> str:
    """How ties are taken where a study file does not say it; "" for a kind that has none."""
    return {"cox": "efron", "fine-gray": "breslow"}.get(kind, "")
