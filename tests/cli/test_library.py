"""The commands of the library: what each says, writes and refuses, and with which exit status."""

import json
import os
from datetime import date, timedelta
from pathlib import Path

import pytest

from clinicalc.library import base64url
from clinicalc.library.keys import key_id
from clinicalc.settings import read_settings
from clinicalc.units.days import day_words
from tests.cli.calling import LIPIDS, call, example
from tests.cli.practices import FINGERPRINT, TARNWICK, WOMAN, Desk, found_practice
from tests.library.keys_at_hand import key_file


def practice_id(desk: Desk) -> str:
    """The id of the practice key."""
    return str(desk.library("list", "--json").record["practice_key"])


class TestFounding:
    def test_the_key_id_is_shown_in_groups_to_be_read_aloud(
        self, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
    ) -> None:
        desk = found_practice(tmp_path, monkeypatch)
        id = practice_id(desk)
        other = os.fspath(tmp_path / "other")
        ended = desk.library("init", other, "--practice", "Tarnwick Mill", "--practice-key", desk.key("practice"))
        grouped = " ".join(id[start : start + 4] for start in range(0, 64, 4))
        assert f"  {grouped[:39]}\n  {grouped[40:]}\n" in ended.out
        assert "Approvers: nobody yet." in ended.out

    def test_a_folder_that_holds_something_is_refused(self, desk: Desk) -> None:
        ended = desk.library("init", desk.place, "--practice", "Tarnwick Mill", "--practice-key", desk.key("practice"))
        assert ended.status == 6
        assert "there is a library in it already" in ended.err

    def test_a_card_without_its_role_is_refused(self, desk: Desk, tmp_path: Path) -> None:
        words = ("--practice", "Mill", "--practice-key", desk.key("practice"), "--approver", desk.card("ada"))
        ended = desk.library("init", os.fspath(tmp_path / "other"), *words)
        assert (ended.status, ended.err) == (
            2,
            "clinicalc: 1 cards and 0 roles are given. Give one --role after each --approver.\n",
        )

    def test_another_machine_joins_when_all_digits_agree(self, desk: Desk, monkeypatch: pytest.MonkeyPatch) -> None:
        id = practice_id(desk)
        monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(desk.folder / "second machine"))
        assert "has not joined the library" in desk.library("list", "--library", desk.place).err
        wrong = f"{id[:20]}{'0' if id[20] != '0' else '1'}{id[21:]}"
        refused = desk.library("join", desk.place, "--practice-key-id", wrong)
        assert refused.status == 6
        assert "20 of its 64 digits agree, counted from the beginning, of 64 typed" in refused.err
        assert id not in refused.err.replace(" ", "")  # or it would be typed off the screen
        assert desk.library("list").status == 6
        spoken = " ".join(id[start : start + 4] for start in range(0, 64, 4)).upper()
        joined = desk.library("join", desk.place, "--practice-key-id", spoken)
        assert joined.out.startswith("All 64 digits agree. This machine now uses the library of Tarnwick Northgate")
        assert desk.library("list").status == 0


class TestPeople:
    def test_who_is_dismissed_may_not_approve_and_what_was_approved_stays(self, approved: Desk) -> None:
        gone = approved.library("dismiss", "Dr Ada Tarn", "--practice-key", approved.key("practice"))
        said = " ".join(gone.out.split())
        assert "Dr Ada Tarn (GP partner) may no longer install, approve or withdraw" in said
        until = day_words(date.today() + timedelta(days=365))
        named = f"Tarnwick cardiovascular disease, invented example 1.0.0 (until {until})"
        assert f"What Dr Ada Tarn approved stays valid: {named}." in said
        assert "Approvers now: Cleo Fell (Practice manager)." in said
        assert approved.library("list", "--json").record["models"][0]["standing"] == "in_use"
        assert call("assess", "--approved", TARNWICK, *WOMAN).status == 0
        refused = approved.library("comment", TARNWICK, "Read.", "--key", approved.key("ada"))
        assert refused.status == 6
        assert "is not that of an approver of Tarnwick Northgate. Approvers in force: Cleo Fell" in refused.err

    def test_who_was_dismissed_comes_back_with_another_key_only(self, approved: Desk) -> None:
        done = approved.library("dismiss", "Dr Ada Tarn", "--practice-key", approved.key("practice"), "--json").record
        assert len(done["still_valid"]) == 1
        assert [approver["name"] for approver in done["approvers"]] == ["Cleo Fell"]
        words = ("--role", "GP partner", "--practice-key", approved.key("practice"), "--card")
        refused = approved.library("appoint", *words, approved.card("ada"))
        assert (refused.status, "was revoked" in refused.err) == (6, True)
        assert approved.library("appoint", "--name", "Dr Ada Tarn", *words, approved.card("press")).status == 0
        assert approved.library("comment", TARNWICK, "Read.", "--key", approved.key("press")).status == 0

    def test_who_is_unknown_is_said_before_a_passphrase_is_asked(
        self, approved: Desk, monkeypatch: pytest.MonkeyPatch
    ) -> None:
        monkeypatch.setenv("CLINICALC_PASSPHRASE", "not the one")
        ended = approved.library("dismiss", "Dr Ben Wick", "--practice-key", approved.key("practice"))
        assert ended.status == 6
        assert "is no approver in force" in ended.err

    def test_only_the_practice_key_appoints(self, desk: Desk) -> None:
        words = ("--role", "Visitor", "--card", desk.card("press"), "--practice-key", desk.key("ada"))
        ended = desk.library("appoint", *words)
        assert ended.status == 6
        assert "does not speak for Tarnwick Northgate" in ended.err

    @pytest.mark.parametrize(("card", "why"), [("practice", "belong to persons"), ("ada", "that of Dr Ada Tarn")])
    def test_a_key_that_cannot_be_appointed_is_refused(self, desk: Desk, card: str, why: str) -> None:
        words = ("--role", "Visitor", "--card", desk.card(card), "--practice-key", desk.key("practice"))
        ended = desk.library("appoint", *words)
        assert ended.status == 6
        assert why in ended.err

    def test_the_practice_key_approves_nothing(self, desk: Desk) -> None:
        ended = desk.install(by="practice")
        assert ended.status == 6
        assert "does not install, approve or withdraw models itself" in ended.err

    def test_approvals_of_a_revoked_key_are_void_but_for_those_named(self, approved: Desk) -> None:
        ada = approved.library("list", "--json").record["approvers"][0]["key"]
        words = ("--reason", "The stick was stolen.", "--practice-key", approved.key("practice"))
        revoked = approved.library("revoke-key", ada[:12], *words)
        assert "No longer in use: Tarnwick cardiovascular disease, invented example 1.0.0." in revoked.out
        assert call("assess", "--approved", TARNWICK, *WOMAN).status == 3
        assert "was revoked already" in approved.library("revoke-key", ada, *words).err

    def test_an_approval_that_is_known_to_be_the_owners_stays(self, approved: Desk) -> None:
        ada = approved.library("list", "--json").record["approvers"][0]["key"]
        words = ("--reason", "The stick was stolen.", "--still-valid", TARNWICK)
        ended = approved.library("revoke-key", ada, *words, "--practice-key", approved.key("practice"))
        assert "No longer in use" not in ended.out
        assert call("assess", "--approved", TARNWICK, *WOMAN).status == 0

    def test_the_policy_is_changed_by_the_practice_key_with_a_reason(self, desk: Desk) -> None:
        key = ("--practice-key", desk.key("practice"), "--reason", "A ship without a network")
        ended = desk.library("policy", "--offline-hours", "72", *key, "--json")
        assert ended.record["policy"] == {"author_may_approve": False, "offline_hours": 72}
        assert "the policy in force already" in desk.library("policy", "--offline-hours", "72", *key).err
        assert "0 to 720 hours" in desk.library("policy", "--offline-hours", "900", *key).err
        assert desk.library("policy", *key).status == 2


class TestInstalling:
    def test_everything_that_was_checked_is_shown(self, desk: Desk) -> None:
        ended = desk.install(LIPIDS, "cleo", "--came-from", "the program")
        for words in (
            "Schema and rules: passed.",
            "each was recomputed and comes out.",
            "Not signed by anybody",
            "Source (published):",
            "Documentation:",
            "Unconfirmed /equations/0/horizons/0/mean_linear_predictor:",
            "Installed by Cleo Fell (Practice manager). Waiting for approval.",
        ):
            assert words in ended.out

    def test_a_look_writes_nothing_and_needs_no_key(self, desk: Desk) -> None:
        ended = desk.library("install", LIPIDS, "--look")
        assert ended.out.endswith("Nothing was installed: this was only a look.\n")
        assert desk.library("list", "--json").record["models"] == []

    def test_the_same_file_is_not_installed_twice(self, approved: Desk) -> None:
        records = sorted(os.listdir(Path(approved.place) / "records"))
        ended = approved.install()
        assert ended.status == 0
        assert "This very file is in the library already, and nothing was written. Approved by Dr Ada Tarn" in (
            ended.out.replace("\n  ", " ")
        )
        assert sorted(os.listdir(Path(approved.place) / "records")) == records

    def test_of_another_version_it_says_how_to_see_the_differences(self, approved: Desk, tmp_path: Path) -> None:
        parsed = json.loads(Path(example(TARNWICK)).read_text("utf-8"))
        parsed["model"]["version"] = "1.0.1"
        (tmp_path / "newer.json").write_text(json.dumps(parsed), "utf-8")
        ended = approved.install(os.fspath(tmp_path / "newer.json"))
        assert "Version 1.0.0 of this model is in the library (in use)." in ended.out
        assert f"clinicalc library diff {FINGERPRINT[:12]} " in ended.out.replace("\n  ", " ")
        named = approved.library("comment", TARNWICK, "Read.", "--key", approved.key("ada"))
        assert "names 2 models of this library: 1.0.0 (e82d 04a7 ad40, in use); 1.0.1" in named.err
        # at the bedside the one in use is meant
        assert call("assess", "--approved", TARNWICK, *WOMAN).status == 0

    def test_a_file_that_is_refused_is_not_installed(self, desk: Desk, tmp_path: Path) -> None:
        text = Path(example(TARNWICK)).read_text("utf-8").replace('"version": "1.0.0"', '"version": "one"')
        (tmp_path / "bad.json").write_text(text, "utf-8")
        assert desk.install(os.fspath(tmp_path / "bad.json")).status == 4
        assert desk.library("list", "--json").record["models"] == []


class TestApproving:
    def test_a_file_nobody_signed_wants_its_whole_fingerprint(self, desk: Desk) -> None:
        desk.install()
        assert "no publisher trusted on this machine signed this file" in desk.approve().err
        wrong = FINGERPRINT[:-1] + ("0" if FINGERPRINT[-1] != "0" else "1")
        refused = desk.approve("--fingerprint", wrong)
        assert refused.status == 6
        assert "63 of its 64 digits agree" in refused.err
        assert "12 of its 64 digits agree" in desk.approve("--fingerprint", FINGERPRINT[:12]).err
        ended = desk.approve("--fingerprint", FINGERPRINT, "--json")
        assert (ended.status, ended.record["model"]["fingerprint"]) == (0, FINGERPRINT)

    def test_a_trusted_publisher_takes_the_place_of_the_fingerprint(self, desk: Desk, tmp_path: Path) -> None:
        signed = os.fspath(tmp_path / "signed.json")
        assert call("sign", example(TARNWICK), "--key", desk.key("press"), "--out", signed).status == 0
        desk.install(signed)
        assert "which this machine does not know" in desk.approve().err
        card = json.loads(Path(desk.card("press")).read_text("utf-8"))
        press = next(p for p in (call("trust", "card", desk.key("press"), "--json").record,))
        assert card["public"] == press["public"]
        assert call("trust", "add", desk.card("press"), "--id", press["id"]).status == 0
        # brought by the approver, but signed by a trusted publisher: no author
        ended = desk.approve("--json", by="cleo")
        assert ended.record["model"]["approval"]["by_author"] is False

    @pytest.mark.parametrize("signer", ["press", "nobody"])
    def test_a_made_up_signature_does_not_help_who_brought_the_file(
        self, desk: Desk, tmp_path: Path, signer: str
    ) -> None:
        """In the name of a publisher trusted here, or of somebody unknown: 64 bytes that no key has made."""
        press = call("trust", "card", desk.key("press"), "--json").record
        assert call("trust", "add", desk.card("press"), "--id", press["id"]).status == 0
        kid = press["id"] if signer == "press" else key_id(b"nobody" * 5 + b"at")
        header = f'{{"alg":"Ed25519","kid":"{kid}","typ":"clinicalc-model+1"}}'.encode()
        made_up = {"protected": base64url.encode(header), "signature": base64url.encode(bytes(range(64)))}
        tree = json.loads(Path(example(TARNWICK)).read_text("utf-8"))
        tree["signatures"] = [made_up]
        file = tmp_path / "made-up.json"
        file.write_text(json.dumps(tree), encoding="utf-8")
        installed = desk.install(os.fspath(file), "cleo", "--json")
        assert installed.status == 0, installed.err
        refused = desk.approve("--fingerprint", FINGERPRINT, by="cleo")
        assert refused.status == 6
        assert "this key installed the file, and no publisher trusted here signed it" in refused.err
        assert desk.library("list", "--json").record["models"][0]["standing"] == "waiting"
        other = desk.approve("--fingerprint", FINGERPRINT, "--json", by="ada")
        assert other.record["model"]["approval"]["by_author"] is False

    def test_a_made_up_signature_is_no_trusted_one(self, desk: Desk, tmp_path: Path) -> None:
        """The genuine signature of a trusted publisher, taken from another file, is worth as little."""
        press = call("trust", "card", desk.key("press"), "--json").record
        assert call("trust", "add", desk.card("press"), "--id", press["id"]).status == 0
        signed = tmp_path / "signed.json"
        assert call("sign", LIPIDS, "--key", desk.key("press"), "--out", os.fspath(signed)).status == 0
        tree = json.loads(Path(example(TARNWICK)).read_text("utf-8"))
        tree["signatures"] = json.loads(signed.read_text("utf-8"))["signatures"]
        file = tmp_path / "moved.json"
        file.write_text(json.dumps(tree), encoding="utf-8")
        desk.install(os.fspath(file))
        refused = desk.approve(by="ada")
        assert refused.status == 6
        assert "no publisher trusted on this machine signed this file" in refused.err
        assert desk.approve("--fingerprint", FINGERPRINT, by="cleo").status == 6

    def test_who_brought_an_unsigned_file_does_not_approve_it(self, desk: Desk) -> None:
        desk.install()
        refused = desk.approve("--fingerprint", FINGERPRINT, by="cleo")
        assert refused.status == 6
        assert "this key installed the file, and no publisher trusted here signed it" in refused.err
        key = ("--practice-key", desk.key("practice"), "--reason", "A practice of two")
        desk.library("policy", "--author-may-approve", *key)
        ended = desk.approve("--fingerprint", FINGERPRINT, by="cleo")
        assert "Approved by Cleo Fell (Practice manager), who also made or brought the file, until" in ended.out

    def test_who_signed_a_file_does_not_approve_it(self, desk: Desk, tmp_path: Path) -> None:
        signed = os.fspath(tmp_path / "signed.json")
        call("sign", example(TARNWICK), "--key", desk.key("ada"), "--out", signed)
        desk.install(signed)
        assert "this key signed the file itself" in desk.approve("--fingerprint", FINGERPRINT).err

    def test_each_unconfirmed_figure_wants_who_compared_it(self, desk: Desk) -> None:
        desk.install(LIPIDS)
        model = "general-cvd-2008-lipids"
        fingerprint = desk.library("list", "--json").record["models"][0]["fingerprint"]
        refused = desk.approve("--fingerprint", fingerprint, model=model)
        assert refused.status == 6
        assert "7 of 7 figures that the file calls unconfirmed were compared by nobody" in refused.err
        part = desk.approve("--fingerprint", fingerprint, "--compared", "/equations/0=Cleo Fell", model=model)
        assert "of 7 figures that the file calls unconfirmed were compared by nobody: /equations/1/" in part.err
        strange = desk.approve("--fingerprint", fingerprint, "--compared", "/use=Cleo Fell", model=model)
        assert "is no figure that this file calls unconfirmed" in strange.err
        words = ("--compared", "/equations=Cleo Fell", "--compared", "/equations/1=Dr Ada Tarn")
        ended = desk.approve("--fingerprint", fingerprint, *words, "--json", model=model)
        compared = ended.record["model"]["approval"]["compared"]
        assert {one["by"] for one in compared if one["at"].startswith("/equations/1")} == {"Dr Ada Tarn"}
        assert {one["by"] for one in compared if one["at"].startswith("/equations/0")} == {"Cleo Fell"}

    def test_a_recalibration_is_fixed(self, desk: Desk) -> None:
        desk.install(example("cvd-2021-regional"))
        fingerprint = desk.library("list", "--json").record["models"][0]["fingerprint"]
        model = "cvd-2021-regional"
        words = ("--fingerprint", fingerprint, "--compared", "=Dr Ada Tarn")
        assert "gives no number without one of its recalibrations" in desk.approve(*words, model=model).err
        assert "is not a recalibration of this file" in desk.approve(*words, "--recalibration", "x", model=model).err
        assert desk.approve(*words, "--recalibration", "low", model=model).status == 0
        values = ("prior_cvd=no", "diabetes=no", "age=50", "sex=male", "smoker=yes", "systolic_bp=140")
        cholesterol = ("total_cholesterol=6.3 mmol/L", "hdl_cholesterol=1.4 mmol/L")
        ended = call("assess", "--approved", model, *values, *cholesterol, "--json")
        assert ended.record["recalibration"] == "low"
        by_name = call("assess", example(model), *values, *cholesterol, "--recalibration", "low", "--json")
        assert ended.record["probability"] == by_name.record["probability"]
        other = call("assess", "--approved", model, *values, *cholesterol, "--recalibration", "high")
        assert other.status == 2
        assert "cannot be chosen: the practice approved this model with the recalibration low" in other.err

    @pytest.mark.parametrize(
        ("until", "why"),
        [
            ("30.11.2027", "is no day of the calendar"),
            ("2027-02-30", "is no day of the calendar"),
            (date.today().isoformat(), "is not in the future"),
            ((date.today() + timedelta(days=6 * 365)).isoformat(), "is more than 5 years ahead"),
        ],
    )
    def test_a_review_date_that_cannot_be_is_refused(self, desk: Desk, until: str, why: str) -> None:
        desk.install()
        ended = desk.approve("--fingerprint", FINGERPRINT, until=until)
        assert ended.status == 2
        assert why in ended.err

    @pytest.mark.parametrize(
        ("point", "why"),
        [
            ("0.10;Talk", "is no decision point"),
            ("ten;Talk;Meeting", "is no decision point"),
            ("10;Talk;Meeting", "did you mean 0.1"),
            ("0.1;;Meeting", "its label is empty"),
        ],
    )
    def test_a_decision_point_that_cannot_be_is_refused(self, desk: Desk, point: str, why: str) -> None:
        desk.install()
        ended = desk.approve("--fingerprint", FINGERPRINT, "--decision-point", point)
        assert ended.status == 2
        assert why in ended.err

    def test_an_approval_is_extended_with_its_choices(self, approved: Desk) -> None:
        later = (date.today() + timedelta(days=700)).isoformat()
        words = ("--key", approved.key("ada"), "--reason", "Reviewed", "--review-until")
        before = approved.library("list", "--json").record["models"][0]["approval"]
        assert approved.library("extend", TARNWICK, *words, before["review_until"]).status == 2
        ended = approved.library("extend", TARNWICK, *words, later, "--json")
        after = ended.record["model"]["approval"]
        assert after["review_until"] == later
        assert after["decision_points"] == before["decision_points"]


def test_the_fingerprint_of_the_shipped_file() -> None:
    assert f"{FINGERPRINT[:4]} {FINGERPRINT[4:8]} {FINGERPRINT[8:12]}" in call("inspect", example(TARNWICK)).out


def test_a_wrong_passphrase_writes_nothing(desk: Desk, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("CLINICALC_PASSPHRASE", "another four plain words")
    ended = desk.install()
    assert ended.status == 6
    assert "the passphrase does not open this key" in ended.err
    assert desk.library("list", "--json").record["models"] == []


def test_a_strangers_key_writes_nothing(desk: Desk) -> None:
    key_file(Path(desk.key("stranger")), "A Stranger")
    ended = desk.install(by="stranger")
    assert ended.status == 6
    assert "is not that of an approver" in ended.err
    assert desk.library("list", "--json").record["models"] == []


def test_what_is_refused_is_refused_before_a_passphrase_is_asked(desk: Desk, monkeypatch: pytest.MonkeyPatch) -> None:
    """Without a passphrase to be found it would be asked at the keyboard, and a test has none: exit status 5."""
    desk.install()
    key_file(Path(desk.key("stranger")), "A Stranger")
    monkeypatch.delenv("CLINICALC_PASSPHRASE")
    assert desk.approve().status == 6
    assert desk.approve("--fingerprint", FINGERPRINT, until="2020-01-01").status == 2
    assert desk.install(LIPIDS, by="stranger").status == 6
    words = ("--role", "Visitor", "--card", desk.card("press"), "--practice-key", desk.key("ada"))
    assert desk.library("appoint", *words).status == 6


def test_founding_names_the_practice_on_this_machines_prints_where_it_has_no_name(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    found_practice(tmp_path, monkeypatch)
    assert read_settings().settings.practice == "Tarnwick Northgate"
