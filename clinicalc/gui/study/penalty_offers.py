"""What can be done about a fit that was refused: a penalty that gives it an estimate, offered as a button."""

from clinicalc.errors import ClinicalcError, DescriptionRefused
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.study.study_state import OpenedStudy

_WORDS = {Ask.FIRTH: "Fit {0}with Fir{1}th’s penalty…", Ask.RIDGE: "Fit {0}with a r{1}idge penalty…"}
_SAYS = (
    "A penalty gives an estimate where there is none without it. The form opens with it chosen; nothing is fitted yet."
)


def add_offers(sheet: StepSheet, opened: OpenedStudy, error: ClinicalcError) -> None:
    """A row of buttons for each equation that a penalty would help; only the first row has access letters."""
    found = penalties_offered(opened, error)
    if found:
        sheet.add_words(_SAYS, soft=True)
    for row, (place, asks) in enumerate(found.items()):
        name = f"{opened.study.fits[place].id} " if len(opened.study.fits) > 1 else ""
        mark = "&" if row == 0 else ""
        sheet.add_asks(tuple((_WORDS[ask].format(name, mark), ask) for ask in asks), place=place)


def penalties_offered(opened: OpenedStudy, error: ClinicalcError) -> dict[int, tuple[Ask, ...]]:
    """The penalties that the refusal names, by the place of the equation in the study file."""
    if not isinstance(error, DescriptionRefused):
        return {}
    found: dict[int, tuple[Ask, ...]] = {}
    for place, plan in enumerate(opened.study.fits):
        table = f"estimate.{plan.id}"
        about = [one for one in error.problems if one.path == table or one.path.startswith(f"{table}.")]
        asks = tuple(dict.fromkeys(Ask(offer) for one in about for offer in one.offers))
        if asks:
            found[place] = asks
    return found
