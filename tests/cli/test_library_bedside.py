"""The commands of the library at the bedside: models in use and out of use, and what each says and refuses."""

from datetime import date
from pathlib import Path

from tests.cli.calling import LIPIDS, call, example
from tests.cli.practices import FINGERPRINT, TARNWICK, WOMAN, Desk


class TestOutOfUse:
    def test_a_hold_needs_no_key_and_ends_with_a_release(self, approved: Desk) -> None:
        held = approved.library("hold", TARNWICK, "--why", "Looks odd")
        assert "Held on this machine since" in held.out
        stopped = call("assess", "--approved", TARNWICK, *WOMAN)
        assert (stopped.status, "Looks odd" in stopped.out) == (3, True)
        assert approved.library("release", TARNWICK).status == 0
        assert call("assess", "--approved", TARNWICK, *WOMAN).status == 0

    def test_a_withdrawal_stands_until_an_approval_follows(self, approved: Desk) -> None:
        words = ("--key", approved.key("cleo"), "--reason", "A misprint")
        ended = approved.library("withdraw", TARNWICK, *words)
        assert "Withdrawn by Cleo Fell on" in ended.out
        assert "it is withdrawn already" in approved.library("withdraw", TARNWICK, *words).err
        extend = ("--key", approved.key("ada"), "--reason", "Reviewed", "--review-until", "2027-12-31")
        assert "no approval is in force" in approved.library("extend", TARNWICK, *extend).err
        assert approved.approve("--fingerprint", FINGERPRINT).status == 0
        assert call("assess", "--approved", TARNWICK, *WOMAN).status == 0

    def test_a_changed_file_gives_no_number_and_verify_names_it(self, approved: Desk) -> None:
        sound = approved.library("verify")
        assert (sound.status, sound.out) == (0, "4 records and 1 model verified. Everything agrees.\n")
        file = Path(approved.place) / "models" / f"{FINGERPRINT}.json"
        file.chmod(0o600)
        content = file.read_bytes()
        file.write_bytes(content.replace(b'"version":"1.0.0"', b'"version":"1.0.1"'))
        ended = approved.library("verify")
        assert ended.status == 6
        assert ended.out.startswith("Stops: ")
        stopped = call("assess", "--approved", TARNWICK, *WOMAN)
        assert stopped.status == 3
        assert "12.3" not in stopped.out

    def test_a_model_that_rests_says_why_all_the_same(self, desk: Desk) -> None:
        desk.install()
        desk.library("list")  # from here on it is left out of an opening for the bedside
        waiting = call("assess", "--approved", TARNWICK, *WOMAN)
        assert (waiting.status, "Waiting for approval" in waiting.out) == (3, True)
        desk.approve("--fingerprint", FINGERPRINT)
        desk.library("withdraw", TARNWICK, "--key", desk.key("cleo"), "--reason", "A misprint")
        for named in (TARNWICK, FINGERPRINT[:12]):
            withdrawn = call("assess", "--approved", named, *WOMAN)
            assert (withdrawn.status, "Withdrawn by Cleo Fell on" in withdrawn.out) == (3, True)


class TestAtTheBedside:
    def test_the_number_is_that_of_the_file(self, approved: Desk) -> None:
        ours = call("assess", "--approved", FINGERPRINT[:12], *WOMAN, "--json").record
        by_name = call("assess", example(TARNWICK), *WOMAN, "--json").record
        assert (ours["probability"], ours["band"]) == (by_name["probability"], by_name["band"])
        assert by_name["vetting"] is None
        assert ours["vetting"]["by"] == "Dr Ada Tarn"
        assert ours["vetting"]["approved_on"] == date.today().isoformat()
        assert ours["model"]["fingerprint"] == FINGERPRINT

    def test_a_file_and_an_approved_model_are_not_both_taken(self, approved: Desk) -> None:
        ended = call("assess", example(TARNWICK), "--approved", TARNWICK, *WOMAN)
        assert ended.status == 2
        assert "and --approved are both given" in ended.err
        assert call("assess", example(TARNWICK), *WOMAN, "--library", approved.place).status == 2

    def test_an_unknown_model_is_named_with_the_likely_slip(self, approved: Desk) -> None:
        ended = call("assess", "--approved", "tarnwik-cvd-10y", *WOMAN)
        assert ended.status == 6
        assert "Did you mean tarnwick-cvd-10y?" in ended.err

    def test_no_number_for_a_program_is_said_in_json(self, desk: Desk) -> None:
        desk.install()
        ended = call("assess", "--approved", TARNWICK, *WOMAN, "--json")
        assert (ended.status, ended.record["probability"]) == (3, None)
        assert ended.record["standing"] == "waiting"
        assert "Waiting for approval" in ended.record["because"]

    def test_figures_that_were_compared_are_a_note(self, desk: Desk) -> None:
        desk.install(LIPIDS)
        fingerprint = desk.library("list", "--json").record["models"][0]["fingerprint"]
        model, words = "general-cvd-2008-lipids", ("--compared", "/equations=Cleo Fell")
        desk.approve("--fingerprint", fingerprint, *words, model=model)
        values = ("total_cholesterol=180 mg/dL", "hdl_cholesterol=47 mg/dL")
        entered = [word for word in WOMAN if "cholesterol" not in word]
        found = call("assess", "--approved", model, *entered, *values, "--json").record["findings"]
        grades = {finding["grade"] for finding in found if finding["code"] == "unconfirmed"}
        assert grades == {"note"}
        by_name = call("assess", LIPIDS, *entered, *values, "--json").record["findings"]
        assert {finding["grade"] for finding in by_name if finding["code"] == "unconfirmed"} == {"caution"}
