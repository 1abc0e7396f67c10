"""Every page and form of first run and trust, in the widths it is given: nothing cut or nameless, no letter twice."""

from collections.abc import Callable
from pathlib import Path

import pytest
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.gui.form import Form
from clinicalc.gui.practice.bundle_form import BundleForm
from clinicalc.gui.practice.change_passphrase_form import ChangePassphraseForm
from clinicalc.gui.practice.first_file_page import FirstFilePage
from clinicalc.gui.practice.founded_page import FoundedPage
from clinicalc.gui.practice.join_form import JoinForm
from clinicalc.gui.practice.make_key_form import MakeKeyForm
from clinicalc.gui.practice.own_key_form import OwnKeyForm
from clinicalc.gui.practice.place_form import PlaceForm
from clinicalc.gui.practice.practice_key_form import PracticeKeyForm
from clinicalc.gui.practice.publisher_forms import RevokePublisherForm, TrustPublisherForm
from clinicalc.gui.practice.publishers_form import PublishersForm
from clinicalc.gui.practice.rule_form import RuleForm
from clinicalc.gui.practice.start_page import StartPage
from clinicalc.gui.practice.steps_page import StepsPage
from clinicalc.library.records import Approver
from clinicalc.library.trust_store import Publisher, trust_publisher
from clinicalc.operations.founding_steps import FoundingPlan, MachineStands
from clinicalc.operations.library_reading import now
from clinicalc.operations.practice_founding import Founded
from tests.gui.practice.desks import Person
from tests.gui.walking import access_letters, cut_texts, nameless, rich_texts, settle, small_targets, tab_walk
from tests.library.keys_at_hand import key_of

SHARE = Path("/media/tarnwick-northgate/models")
KEY = key_of("R. Osei")
PLAN = FoundingPlan("Tarnwick Northgate", SHARE, Approver("R. Osei", "partner", KEY.public), "", True)
PUBLISHER = Publisher(KEY.card, now())
PAGES: dict[str, Callable[[Person], QWidget]] = {
    "start": lambda _: StartPage(MachineStands(None, "", "", ())),
    "not joined": lambda _: StartPage(MachineStands(SHARE, "", "", ("settings.toml, line 3: this is not TOML.",))),
    "another": lambda _: StartPage(MachineStands(SHARE, KEY.id, "", ())),
    "nothing settled": lambda _: StepsPage(FoundingPlan()),
    "all settled": lambda _: StepsPage(PLAN),
    "place": lambda person: PlaceForm(person.errands, person.choose, PLAN),
    "own key": lambda person: OwnKeyForm(person.errands, person.choose, PLAN),
    "rule": lambda person: RuleForm(person.errands, PLAN),
    "practice key": lambda person: PracticeKeyForm(person.errands, person.choose, PLAN),
    "founded": lambda _: FoundedPage(Founded(SHARE, "Tarnwick Northgate", KEY.id, "")),
    "join": lambda person: JoinForm(person.errands, person.choose),
    "bundle": lambda person: BundleForm(person.errands, person.choose, person.choose),
    "first file": lambda person: FirstFilePage(person.errands, person.choose),
    "passphrase": lambda person: ChangePassphraseForm(person.errands, person.choose),
    "make key": lambda person: MakeKeyForm(person.errands, person.choose),
    "trust": lambda person: TrustPublisherForm(person.errands, person.choose),
    "revoke": lambda person: RevokePublisherForm(person.errands, PUBLISHER),
    "publishers": lambda person: PublishersForm(person.errands, person.choose),
}
WIDTHS = {"beside the list": 880, "at 1024": 624, "in one column": 640, "a wide screen": 1500}


def put(person: Person, page: QWidget, width: int) -> QWidget:
    """The page in a window, at rest."""
    window = QWidget()
    column = QVBoxLayout(window)
    column.setContentsMargins(0, 0, 0, 0)
    column.addWidget(page)
    person.show(window)
    window.resize(width, 560)
    person.rest()
    settle()
    return window


@pytest.mark.parametrize("name", PAGES)
@pytest.mark.parametrize("width", WIDTHS.values(), ids=WIDTHS.keys())
def test_nothing_is_cut(person: Person, name: str, width: int) -> None:
    trust_publisher(KEY.card, KEY.id, now())
    window = put(person, PAGES[name](person), width)
    assert cut_texts(window) == []
    assert small_targets(window) == []


@pytest.mark.parametrize("name", PAGES)
def test_everything_says_what_it_is_and_no_letter_is_taken_twice(person: Person, name: str) -> None:
    page = PAGES[name](person)
    window = put(person, page, 880)
    assert nameless(window) == []
    assert rich_texts(window) == []
    letters = access_letters(window)
    assert len(set(letters)) == len(letters), letters


@pytest.mark.parametrize("name", PAGES)
def test_the_tab_key_comes_round_and_meets_every_button(person: Person, name: str) -> None:
    page = PAGES[name](person)
    window = put(person, page, 880)
    page.focus_first()  # type: ignore[attr-defined]
    first = window.focusWidget()
    assert first is not None
    met = tab_walk(window, first)
    for form in page.findChildren(Form):
        assert {form.leave, form.deed} <= set(met)
