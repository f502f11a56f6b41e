"""The field page in a browser at phone size, by keyboard, with the server's process killed after the first visit."""
import json
import subprocess
from pathlib import Path

import pytest

from precontact_rules import released

HERE = Path(__file__).parent
CHECKS = ["loading-error", "device-trip", "loop-shift", "induced-voltage"]


@pytest.fixture(scope="session")
def questions():
    """{check: question} that the typed questions must become."""
    script = "import('./questions.mjs').then(({ QUESTIONS }) => console.log(JSON.stringify(QUESTIONS)))"
    done = subprocess.run(["node", "-e", script], cwd=HERE, capture_output=True, text=True, check=True)
    return {row["check"]: row["question"] for row in json.loads(done.stdout)}


def test_the_rule_set_was_proved_on_the_device_before_first_use(visit):
    proved = len(json.loads(released.latest().bytes)["cases"])
    assert f"{proved} of {proved} worked cases agree" in visit["footer"]


def test_the_server_was_dead(visit):
    assert visit["serverAnswers"] is False


def test_the_page_opened_again_without_a_server(visit):
    assert "Rule set 1.0.0" in visit["offlineFooter"]
    assert "opens without a network" in visit["offlineFooter"]


@pytest.mark.parametrize("check", CHECKS)
def test_what_was_typed_became_exactly_the_question(visit, questions, check):
    assert visit["exported"][check]["question"] == questions[check]


@pytest.mark.parametrize("check", CHECKS)
def test_the_exported_answer_is_that_of_the_service(visit, check):
    exported = visit["exported"][check]
    assert exported["answer"] == json.loads(json.dumps(released.latest().answer(check, exported["question"], language="en")))


@pytest.mark.parametrize("check", CHECKS)
def test_the_focus_went_to_the_verdict(visit, check):
    assert visit["focus"][check].startswith("Verdict: ")


def test_no_request_left_the_origin(visit):
    assert visit["outside"] == []


def test_the_content_policy_was_not_violated(visit):
    assert visit["violations"] == []


def test_no_script_failed(visit):
    assert visit["errors"] == []


def test_axe_finds_no_barrier_in_any_view(visit):
    assert len(visit["barriers"]) >= 40
    assert [(row["view"], row["axe"]) for row in visit["barriers"] if row["axe"]] == []


def test_no_view_is_wider_than_the_phone(visit):
    assert [(row["view"], row["wide"]) for row in visit["barriers"] if row["wide"] > 0] == []


def test_every_target_can_be_touched_with_a_glove(visit):
    assert [(row["view"], row["small"]) for row in visit["barriers"] if row["small"]] == []


def test_faults_are_listed_in_words_and_the_focus_goes_there(visit):
    assert visit["summary"]["focused"] == "summary"
    rows = visit["summary"]["rows"]
    assert len(rows) == 3
    assert "1,000 can be read in two ways; write 1000, or 1,0000" in rows[0]
    assert "must be at least 0\u00a0Ω and at most" in rows[1]
    assert "this is needed and still empty" in rows[2]


def test_a_row_of_the_summary_leads_to_its_field(visit):
    assert visit["led"]["id"] == "at/source/voltage_volt"
    assert visit["led"]["invalid"] == "true"
    assert "can be read in two ways" in visit["led"]["described"]


def test_faults_are_said_in_spanish(visit):
    assert "1,000 se puede leer de dos maneras" in visit["rows-es"][0]
    assert "debe ser al menos 0\u00a0Ω" in visit["rows-es"][1]


def test_the_document_says_its_language(visit):
    assert (visit["lang-en"], visit["lang-es"]) == ("en", "es")


def test_large_digits_come_with_a_prefix_to_pick(visit):
    assert visit["digits"] == {"keypad": "decimal", "read": "= 4.7\u00a0kΩ"}


def test_what_was_typed_outlives_a_reload(visit):
    assert visit["draftAfterReload"] == "1,000"


def test_a_development_key_is_said_loudly(visit):
    assert "WARNING: The rule set is signed with a development key" in visit["developmentNotice"]


def test_a_retirement_is_shown(visit):
    for words in ("deprecated as of 3 February 2031", "no longer be offered from 3 February 2032", "A better one is out."):
        assert words in visit["retirementNotice"]


def test_an_update_says_its_size_and_time(visit):
    assert visit["updateText"].startswith("Rule set 1.0.0 is the latest: ")
    assert visit["focusAfterUpdate"] == "update-now"
    assert "received" in visit["updateText"] and visit["updateText"].endswith(" s.")


def test_a_changed_bundle_is_refused_in_the_language_of_the_device(visit):
    assert "No hay reglas en este dispositivo" in visit["refused"]
    assert "Sus bytes no son los anunciados." in visit["refused"]


def test_a_newer_page_is_gathered_whole_and_offered(visit):
    assert visit["headingBeforeRenewal"] == "Before the probe touches: which question?"


def test_points_are_kept_reopened_and_deleted(visit):
    assert sorted(visit["pointsKept"]) == sorted(f"Panel of {check}" for check in CHECKS)
    assert visit["reopened"] == "4R7"
    assert sorted(visit["pointsAfterOne"]) == sorted(f"Panel of {check}" for check in CHECKS if check != "loop-shift")
    assert visit["pointsAfterAll"] == []
