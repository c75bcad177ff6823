"""The command, run in this process."""

import pytest
from commands import Run

from trivector.cli import main


@pytest.fixture
def run(capsys: pytest.CaptureFixture[str]) -> Run:
    def run_command(*argv: str) -> tuple[int, str, list[str]]:
        code = main(argv)
        captured = capsys.readouterr()
        assert "Traceback" not in captured.err
        return code, captured.out, captured.err.splitlines()

    return run_command
