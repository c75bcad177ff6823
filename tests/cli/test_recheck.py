"""The command ``trivector recheck``."""

import gzip
import io
import json
from pathlib import Path
from typing import Any

import pytest
from commands import Run
from forging import sealed

from trivector.certificates import checker

ROOT = Path(__file__).parents[2]
TWENTY = str(ROOT / "data" / "twenty-planes.json")
SIXTEEN = str(ROOT / "data" / "f7-sixteen.json")
MINUS_THREE = str(ROOT / "data" / "twenty-minus-three.json")


def certificate(run: Run, path: Path, *command: str) -> dict[str, Any]:
    run(*command, "--certificate", str(path))
    return dict(json.loads(path.read_text("utf-8")))


def test_each_claim_is_said_with_the_field_and_all_hold(run: Run, tmp_path: Path) -> None:
    file = tmp_path / "certificate.json"
    made = certificate(run, file, "examine", TWENTY)
    code, out, err = run("recheck", str(file))
    assert (code, err) == (0, [])
    assert "claims  (over Q)" in out
    for claim in ("incidence", "span", "all planes", "complete"):
        assert f"{claim} " in out
    assert out.count("holds: ") == 4
    assert "FAILS" not in out
    assert made["sha256"] in out
    assert "by ranks over F_" in out


def test_json_has_a_verdict_for_each_claim(run: Run, tmp_path: Path) -> None:
    file = tmp_path / "certificate.json"
    made = certificate(run, file, "planes", SIXTEEN)
    code, out, _ = run("recheck", str(file), "--json")
    answer = json.loads(out)
    assert code == 0
    assert (answer["kind"], answer["holds"]) == ("recheck", True)
    assert answer["field"] == {"characteristic": 7}
    assert answer["sha256"] == made["sha256"]
    assert [claim["claim"] for claim in answer["claims"]] == ["span", "all planes"]
    assert all(claim["holds"] is True and claim["words"] for claim in answer["claims"])


def test_what_is_answered_no_is_certified_too(run: Run, tmp_path: Path) -> None:
    file = tmp_path / "certificate.json"
    made = certificate(run, file, "examine", MINUS_THREE)
    assert made["claims"][-1]["over_closure"] is False
    assert run("recheck", str(file))[0] == 0


def test_a_false_claim_is_named_and_the_others_are_still_checked(run: Run, tmp_path: Path) -> None:
    file = tmp_path / "certificate.json"
    made = certificate(run, file, "examine", TWENTY)
    claims = [dict(claim) for claim in made["claims"]]
    claims[1]["dimension"] = 9
    file.write_text(json.dumps(sealed(made, claims=claims)), "utf-8")
    code, out, err = run("recheck", str(file), "--json")
    answer = json.loads(out)
    assert (code, err, answer["holds"]) == (1, [], False)
    assert [claim["holds"] for claim in answer["claims"]] == [True, False, True, True]
    assert answer["claims"][1]["words"] == "dimension is 10"
    code, out, _ = run("recheck", str(file))
    assert code == 1
    assert "FAILS: dimension is 10" in out
    assert "not every claim holds" in out


def test_a_changed_text_fails_by_its_digest(run: Run, tmp_path: Path) -> None:
    file = tmp_path / "certificate.json"
    made = certificate(run, file, "examine", TWENTY)
    file.write_text(json.dumps({**made, "title": "another"}), "utf-8")
    code, out, _ = run("recheck", str(file))
    assert code == 1
    assert "FAILS: the SHA-256 does not agree with the contents" in out


def test_standard_input_gz_and_an_output_file(
    run: Run, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    file, answer = tmp_path / "certificate.json", tmp_path / "answer.txt"
    certificate(run, file, "examine", SIXTEEN)
    packed = tmp_path / "certificate.json.gz"
    packed.write_bytes(gzip.compress(file.read_bytes()))
    assert run("recheck", str(packed))[0] == 0
    monkeypatch.setattr("sys.stdin", io.TextIOWrapper(io.BytesIO(file.read_bytes()), "utf-8"))
    code, out, _ = run("recheck", "-", "-o", str(answer), "--quiet")
    assert (code, out) == (0, "")
    assert "every claim holds" in answer.read_text("utf-8")


@pytest.mark.parametrize(("version", "word"), [(0, "too old"), (2, "too new")])
def test_other_versions_have_their_own_errors(
    run: Run, tmp_path: Path, version: int, word: str
) -> None:
    file = tmp_path / "certificate.json"
    made = certificate(run, file, "examine", SIXTEEN)
    file.write_text(json.dumps(sealed(made, format=version)), "utf-8")
    code, out, err = run("recheck", str(file))
    assert (code, out, len(err)) == (2, "", 1)
    assert word in err[0]
    assert str(file) in err[0]


@pytest.mark.parametrize(
    "text",
    ["", "{", "[]", "null", '{"kind": "planes"}', '{"kind": "certificate"}', "\0", "9" * 5000],
)
def test_what_is_no_certificate_is_refused_in_one_line(run: Run, tmp_path: Path, text: str) -> None:
    file = tmp_path / "other.json"
    file.write_text(text, "utf-8")
    code, out, err = run("recheck", str(file))
    assert (code, out, len(err)) == (2, "", 1)
    assert str(file) in err[0]


def test_no_such_file_and_a_directory_are_refused(run: Run, tmp_path: Path) -> None:
    for path in (tmp_path / "absent.json", tmp_path):
        code, out, err = run("recheck", str(path))
        assert (code, out, len(err)) == (2, "", 1)
        assert str(path) in err[0]
    assert run("recheck")[0] == 2


def test_more_work_can_be_allowed(
    run: Run, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    file = tmp_path / "certificate.json"
    certificate(run, file, "examine", TWENTY)
    monkeypatch.setattr(checker, "MOST_WORK", 10**6)
    code, out, err = run("recheck", str(file))
    assert (code, out, len(err)) == (2, "", 1)
    assert err[0].endswith("more work has to be allowed; give --work N")
    assert run("recheck", str(file), "--work", "1000")[0] == 0
    assert checker.MOST_WORK == 10**6
    assert checker.main(str(file)) == 2
    assert "more work has to be allowed" in capsys.readouterr().err
    assert checker.main(str(file), "1000") == 0
    assert checker.main(str(file), "many") == 2


@pytest.mark.parametrize(
    ("key", "value"), [("uncertified", 5), ("uncertified", [5]), ("field", []), ("sha256", 7)]
)
def test_what_is_shown_must_have_its_form(run: Run, tmp_path: Path, key: str, value: Any) -> None:
    file = tmp_path / "certificate.json"
    made = certificate(run, file, "examine", SIXTEEN)
    file.write_text(json.dumps({**made, key: value}), "utf-8")
    code, out, err = run("recheck", str(file))
    assert (code, out, len(err)) == (2, "", 1)
    assert f"{key}: a" in err[0]
