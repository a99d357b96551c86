"""The command: streams, statuses, JSON, errors; nothing a user types ends in a traceback."""

from __future__ import annotations

import json
import math
import subprocess
import sys
from typing import Any

import pytest

import redoxq
from redoxq.cli import main

Capture = pytest.CaptureFixture[str]


def run(*arguments: str, text: str | bytes | None = None) -> subprocess.CompletedProcess[bytes]:
    fed = text.encode() if isinstance(text, str) else text
    command = [sys.executable, "-m", "redoxq", *arguments]
    return subprocess.run(command, input=fed or b"", capture_output=True, timeout=60)


def numbers(value: Any) -> list[float]:
    if isinstance(value, dict):
        return [number for item in value.values() for number in numbers(item)]
    if isinstance(value, list):
        return [number for item in value for number in numbers(item)]
    return [value] if isinstance(value, int | float) else []


def refuse(constant: str) -> None:
    raise AssertionError(f"{constant} is no JSON")


def read(line: str) -> dict[str, Any]:
    found = json.loads(line, parse_constant=refuse)
    assert isinstance(found, dict)
    assert all(math.isfinite(number) for number in numbers(found))
    return found


def ask_json(capsys: Capture, sentence: str) -> tuple[int, dict[str, Any]]:
    status = main(["ask", sentence, "--json"])
    out, err = capsys.readouterr()
    assert err == ""
    assert out.count("\n") == 1
    return status, read(out)


EVERY = {"statement", "kind", "summary", "temperature_K", "assumptions"}
REACTION = {"reaction", "electrons", "standard_emf_V", "delta_G_kJ_mol", "log10_K"}
CONTACT = {"verdict", "pressure_bar", "validity", "without_air", "under_air", "happenings", "reasons", "cautions",
           "hazards", "liquor", "data_version", "emf_V", "emf_uncertainty_V"}


@pytest.mark.parametrize(("sentence", "kind", "keys"), [
    ("zinc in 0.5 M copper sulfate", "contact", CONTACT | REACTION | {"end_state"}),
    ("copper in 1 M zinc sulfate without air", "contact", CONTACT | REACTION),
    ("Cu+2 + 2 e- = Cu at 40 C", "reaction", REACTION),
    ("AgCl(s) = Ag+ + Cl-", "reaction", {"reaction", "delta_G_kJ_mol", "log10_K"}),
    ("about Cu+2", "species", {"figures"}),
    ("about 0.1 M NH3 + 0.1 M NH4Cl", "liquor", {"liquor"}),
    ("let rinse = 5 g/L CuSO4 at 45 C", "definition", set()),
])
def test_json_keys(capsys: Capture, sentence: str, kind: str, keys: set[str]) -> None:
    status, answer = ask_json(capsys, sentence)
    assert status == 0
    assert answer["kind"] == kind
    assert answer["statement"] == sentence
    assert EVERY | keys <= answer.keys()
    assert "error" not in answer


def test_parts_of_a_contact(capsys: Capture) -> None:
    answer = ask_json(capsys, "zinc in 0.5 M copper sulfate")[1]
    assert answer["verdict"] == "attacked"
    assert {"what": "plates", "species": "Cu"} in answer["happenings"]
    assert answer["reaction"] == "Zn + Cu+2 -> Zn+2 + Cu"
    assert answer["reasons"][0].keys() == {"rule", "text", "source"}
    assert answer["reasons"][0]["rule"] == "thermodynamics"
    assert {"pH", "residual", "dissolved_g", "plated_g", "gas_mol"} <= answer["end_state"].keys()
    assert answer["end_state"]["residual"][0].keys() == {"species", "mol_kg", "mg_L"}
    assert {"pH", "ionic_strength_mol_kg", "density_kg_m3", "water_activity", "osmotic_coefficient",
            "mean_activity_coefficient", "activity_model", "species"} <= answer["liquor"].keys()
    assert answer["without_air"]["verdict"] == answer["under_air"]["verdict"] == "attacked"


def test_the_command_and_the_library_agree(capsys: Capture) -> None:
    sentence = "copper in 1 M zinc sulfate without air"
    answer = ask_json(capsys, sentence)[1]
    library = json.loads(json.dumps(redoxq.ask(sentence).to_dict()))
    assert answer == {**library, "statement": sentence, "understood": library["statement"]}


def test_a_stream_goes_on_after_a_line_that_fails() -> None:
    lines = ["about Cu+2", "zinc in 0.5 M coper sulfate", "", "let rinse = 1 M HCl", "about rinse"]
    done = run("ask", "-", "--json", text="\n".join(lines))
    answers = [read(line) for line in done.stdout.decode().splitlines()]
    assert done.returncode == 2
    assert [answer["statement"] for answer in answers] == [line for line in lines if line]
    assert [answer.get("kind", "error") for answer in answers] == ["species", "error", "definition", "liquor"]
    assert answers[1].keys() == {"statement", "error"}
    assert answers[1]["error"]["code"] == "unknown-name"
    assert answers[1]["error"]["at"] == [14, 27]
    assert "copper sulfate" in answers[1]["error"]["hint"]


def test_a_stream_of_bytes_that_are_no_text() -> None:
    done = run("ask", "-", "--json", text=b"about \xff\xfe\nabout Cu+2\r\n")
    broken, good = (read(line) for line in done.stdout.decode().splitlines())
    assert "error" in broken
    assert good["statement"] == "about Cu+2"


def test_a_stream_of_nothing_is_answered_by_nothing() -> None:
    done = run("ask", "-", "--json", text="")
    assert (done.returncode, done.stdout, done.stderr) == (0, b"", b"")


def test_an_error_shows_its_place(capsys: Capture) -> None:
    assert main(["ask", "zinc in 0.5 M coper sulfate"]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.splitlines()[:2] == ["zinc in 0.5 M coper sulfate", " " * 14 + "^" * 13]
    assert "Nearest: copper sulfate" in err


def test_an_answer_starts_with_its_verdict(capsys: Capture) -> None:
    assert main(["ask", "zinc in 0.5 M copper sulfate"]) == 0
    out, err = capsys.readouterr()
    assert out.startswith("ATTACKED")
    assert err == ""


USELESS = {
    "empty": ("", "sentence"),
    "blank": ("   \t ", "sentence"),
    "megabyte": ("zinc in " * 131072, "sentence"),
    "control": ("zinc in \x07\x1b[31m 1 M HCl", None),
    "emoji": ("\N{FACE WITH TEARS OF JOY} in 1 M HCl", None),
    "null byte": ("zinc in 1 M\0 HCl", None),
    "lone surrogate": ("zinc in 1 M H\udcffCl", None),
    "negative": ("zinc in -3 M HCl", "recipe"),
    "over all": ("zinc in 200 wt% NaCl", "recipe"),
    "pH": ("zinc in 1 M HCl, pH 40", "recipe"),
    "hot": ("zinc in 1 M HCl at 900 C", "range"),
    "no water left": ("zinc in 40 M NaCl", "recipe"),
    "gas as metal": ("chlorine in water", None),
    "salt as metal": ("NaCl in water", None),
    "charges": ("zinc in 1 M SO4-2", "recipe"),
    "no atoms balance": ("Zn + Cu+2 = Ag", "reaction"),
    "not yet": ("Zn | ZnSO4 1 M || CuSO4 1 M | Cu", "sentence"),
    "infinite": ("zinc in 1e999 M HCl", None),
}


@pytest.mark.parametrize("case", USELESS)
def test_what_cannot_be_used_is_told(capsys: Capture, case: str) -> None:
    sentence, code = USELESS[case]
    status, answer = ask_json(capsys, sentence)
    assert status == 2
    assert answer["error"]["message"]
    assert code in (None, answer["error"]["code"])
    place = answer["error"]["at"]
    assert place is None or 0 <= place[0] <= place[1] <= len(sentence)
    assert main(["ask", sentence]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert "Traceback" not in err
    assert len(err) < 10_000
    assert "\x1b" not in err


def test_more_salt_than_water_holds_is_said(capsys: Capture) -> None:
    status, answer = ask_json(capsys, "copper in 35 wt% NaCl")
    assert status == 0
    assert any("NaCl(s) settles out" in text for text in answer["assumptions"])


def test_a_missing_strength_is_assumed_aloud(capsys: Capture) -> None:
    assert any("1 M CuSO4" in text for text in ask_json(capsys, "zinc in copper sulfate")[1]["assumptions"])


@pytest.mark.parametrize("arguments", [[], ["zinc", "in", "water"], ["--colour", "x"]])
def test_a_wrong_command_line(arguments: list[str]) -> None:
    with pytest.raises(SystemExit) as stopped:
        main(["ask", *arguments])
    assert stopped.value.code == 2


def test_without_a_command_it_listens() -> None:
    done = run(text="about Cu+2\nnonsense here\n")
    assert done.returncode == 2
    assert done.stdout.decode().startswith("ABOUT")
    assert b"Traceback" not in done.stderr


def test_a_reader_that_leaves_ends_it_quietly() -> None:
    process = subprocess.Popen([sys.executable, "-m", "redoxq", "ask", "-", "--json"], stdin=subprocess.PIPE,
                               stdout=subprocess.PIPE, stderr=subprocess.PIPE)
    assert process.stdin is not None
    assert process.stdout is not None
    assert process.stderr is not None
    process.stdin.write(b"about Cu+2\n")
    process.stdin.flush()
    process.stdout.readline()
    process.stdout.close()
    process.stdin.write(b"about Cu+2\n" * 20)
    process.stdin.close()
    complaint = process.stderr.read()
    process.stderr.close()
    assert process.wait(timeout=60) == 0
    assert complaint == b""


def test_a_question_loads_no_frames_and_no_console() -> None:
    script = ("import sys; from redoxq.cli import main; main(['ask', 'zinc in 0.5 M copper sulfate', '--json']); "
              "print(sorted({'pandas', 'scipy', 'prompt_toolkit', 'chemicals'} & sys.modules.keys()))")
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True)
    assert done.stdout.splitlines()[-1] == "[]"
