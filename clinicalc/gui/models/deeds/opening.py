"""Opens the form of a deed. The page makes one LastKey a window and hands it to every deed.

`open_deed(Deed.INSTALL, None, …)` asks for a file and says `card_ready`; with the card of that file it asks for the
key and installs what was looked at. `LibraryDeed.HISTORY` with a card is the history of that model, without one that of
the whole library.
"""

from clinicalc.errors import UsageError
from clinicalc.gui.deedlike import Deedlike
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseOpen, ChooseSave
from clinicalc.gui.models.deeds.approve_deed import ApproveDeed
from clinicalc.gui.models.deeds.bundle_deeds import BringInDeed, ExportDeed
from clinicalc.gui.models.deeds.given import Given, LastKey, LibraryDeed
from clinicalc.gui.models.deeds.history_deed import HistoryDeed
from clinicalc.gui.models.deeds.hold_deeds import HoldDeed, ReleaseDeed
from clinicalc.gui.models.deeds.install_deeds import InstallDeed, LookDeed
from clinicalc.gui.models.deeds.people_deed import PeopleDeed
from clinicalc.gui.models.deeds.review_deeds import CommentDeed, ExtendDeed, WithdrawDeed
from clinicalc.operations.model_card import Deed, ModelCard
from clinicalc.operations.vetting_desk import VettingDesk

NOTHING_GIVEN = Given()


def open_deed(
    deed: Deed | LibraryDeed,
    card: ModelCard | None,
    desk: VettingDesk,
    errands: Errands,
    choose_open: ChooseOpen,
    choose_save: ChooseSave,
    *,
    last_key: LastKey,
    given: Given = NOTHING_GIVEN,
) -> Deedlike:
    """The form of this deed, ready to be shown; `given` is what stands on the card (fingerprint typed, who compared).

    Raises UsageError for a deed about one model without its card.
    """
    match deed:
        case LibraryDeed.HISTORY:
            return HistoryDeed(card, desk, errands, choose_save)
        case LibraryDeed.EXPORT:
            return ExportDeed(desk, errands, choose_save)
        case LibraryDeed.BRING_IN:
            return BringInDeed(desk, errands, choose_open)
        case LibraryDeed.PEOPLE:
            return PeopleDeed(desk, errands, choose_open, last_key)
        case Deed.INSTALL if card is None:
            return LookDeed(desk, errands, choose_open)
    if card is None:
        raise UsageError("no model is chosen.", do="Choose one in the list.")
    return _open_on_card(deed, card, desk, errands, choose_open, last_key, given)


def _open_on_card(
    deed: Deed,
    card: ModelCard,
    desk: VettingDesk,
    errands: Errands,
    choose_open: ChooseOpen,
    last_key: LastKey,
    given: Given,
) -> Deedlike:
    match deed:
        case Deed.INSTALL:
            return InstallDeed(card, desk, errands, choose_open, last_key)
        case Deed.APPROVE:
            return ApproveDeed(card, desk, errands, choose_open, last_key, given)
        case Deed.EXTEND:
            return ExtendDeed(card, desk, errands, choose_open, last_key, given)
        case Deed.WITHDRAW:
            return WithdrawDeed(card, desk, errands, choose_open, last_key)
        case Deed.COMMENT:
            return CommentDeed(card, desk, errands, choose_open, last_key)
        case Deed.HOLD:
            return HoldDeed(card, desk, errands)
        case Deed.RELEASE:
            return ReleaseDeed(card, desk, errands)
