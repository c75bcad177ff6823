"""How long the lone checker takes, and what a certificate adds to an examination.

Nothing here fails because something is slow: the figures are printed (``-s``
shows them) and collected by pytest-benchmark.
"""

import json
import shutil
import subprocess
import sys
from pathlib import Path
from time import perf_counter
from typing import Any

import pytest

import trivector
from trivector import Configuration, LinearSection
from trivector.certificates import certify_examination, certify_section, checker

pytestmark = pytest.mark.benchmark

DATA = Path(__file__).parents[2] / "data"
TWENTY = DATA / "twenty-planes.json"


def certificate(path: Path) -> dict[str, Any]:
    document = trivector.read(path)
    if isinstance(document, Configuration):
        return certify_examination(document.examine())
    return certify_section(LinearSection(document).examine())


def alone(folder: Path, text: str) -> float:
    """Seconds of the checker, copied out, in a process of its own."""
    script, file = folder / "checker.py", folder / "certificate.json"
    shutil.copy(checker.__file__, script)
    file.write_text(text, "utf-8")
    start = perf_counter()
    done = subprocess.run([sys.executable, "-I", str(script), str(file)], capture_output=True)
    seconds = perf_counter() - start
    assert (done.returncode, done.stderr) == (0, b"")
    return seconds


def test_the_lone_checker_on_the_twenty_planes(benchmark: Any, tmp_path: Path) -> None:
    text = json.dumps(certificate(TWENTY))  # 5 s are allowed
    benchmark.pedantic(lambda: alone(tmp_path, text), rounds=5, iterations=1)


def test_the_lone_checker_on_every_file_of_the_data(tmp_path: Path) -> None:
    times = {}
    for path in sorted(DATA.glob("**/*.json")):
        if path.parent.name == "certificates":
            continue
        times[path.name] = alone(tmp_path, json.dumps(certificate(path)))
    slowest = max(times, key=lambda name: times[name])
    print(f"\n{len(times)} certificates; slowest {slowest}: {times[slowest]:.2f} s (60 allowed)")
    assert len(times) > 40


def test_writing_a_certificate(benchmark: Any) -> None:
    examination = trivector.read(TWENTY).examine()  # 100 ms are allowed
    made = benchmark.pedantic(lambda: certify_examination(examination), rounds=5, iterations=1)
    assert made["claims"]
