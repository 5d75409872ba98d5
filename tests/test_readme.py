"""The README says what is so: its Python runs, its scenes and commands exist, its quoted answer is the program's."""

from __future__ import annotations

import re
from pathlib import Path

import goniosim
from goniosim.catalogue import resolve_scene
from goniosim.cli.main import COMMANDS
from goniosim.planning.words import sentence

README = Path(__file__).parents[1] / "README.md"


def blocks(language: str) -> list[str]:
    return re.findall(rf"```{language}\n(.*?)```", README.read_text(encoding="utf-8"), re.DOTALL)


def test_the_python_example_runs(capsys):
    (example,) = blocks("python")
    exec(compile(example, "README.md", "exec"), {})
    assert capsys.readouterr().out.startswith("True (")


def test_the_quoted_answer_is_the_programs_own():
    (quoted,) = blocks("text")
    plan = goniosim.plan(goniosim.load_scene("right-eye-temporal"))
    assert " ".join(quoted.split()) == sentence(plan)


def test_commands_and_files_that_it_names_exist():
    shell = "\n".join(blocks("sh"))
    for command in re.findall(r"goniosim ([a-z]+)", shell):
        assert command in COMMANDS, command
    text = README.read_text(encoding="utf-8")
    for path in re.findall(r"\]\(([\w./-]+)\)", text) + re.findall(r"python (tests/bench/\w+\.py)", text):
        assert (README.parent / path).exists(), path
    resolve_scene("bench-cup")


def test_two_one_line_commands_that_ci_runs_word_for_word():
    commands = [line for line in README.read_text(encoding="utf-8").splitlines() if line.startswith("python3 -m venv ")]
    assert len(commands) == 2 and "goniosim plan" in commands[0] and "pytest" in commands[1]
