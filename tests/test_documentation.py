"""Every example of the README and of the pages beside it is run and prints what the page says."""

from __future__ import annotations

import doctest
from pathlib import Path

import pytest
from command import ROOT
from documentation import Example, blocks, examples, run, sessions

PAGES = [
    page for page in (ROOT / "README.md", ROOT / "DEVELOPERS.md", ROOT / "grammar" / "reference.md") if page.exists()
]
CASES = [(page, example) for page in PAGES for example in examples(page)]


@pytest.mark.parametrize(("page", "example"), CASES, ids=[f"{page.name}:{example.line}" for page, example in CASES])
def test_a_command_prints_what_the_page_says(
    page: Path, example: Example, tmp_path_factory: pytest.TempPathFactory
) -> None:
    shims = tmp_path_factory.getbasetemp()
    printed = run(example.command, ROOT, shims)
    assert printed.splitlines() == example.printed.rstrip("\n").splitlines(), f"{page.name}:{example.line}"


@pytest.mark.parametrize("session", [test for page in PAGES for test in sessions(page)], ids=lambda test: test.name)
def test_a_session_of_the_interpreter_goes_as_the_page_says(session: doctest.DocTest) -> None:
    said: list[str] = []
    result = doctest.DocTestRunner(verbose=False).run(session, out=said.append)
    assert result.failed == 0, "".join(said)


def test_the_pages_have_examples_and_the_readme_its_two_commands() -> None:
    readme = ROOT / "README.md"
    assert len(examples(readme)) >= 10 and sessions(readme)
    main, tests = (block for _, block in blocks(readme, "sh"))
    script = main.split()[-1]
    assert "pip install ." in main and "opslang run" in main and (ROOT / script).is_file()
    assert "-m pytest" in tests and "[test]" in tests
    assert "-m pytest" in (ROOT / ".ci" / "run").read_text()


def test_the_first_paragraph_is_the_job() -> None:
    title, first, *_ = (ROOT / "README.md").read_text().split("\n\n")
    assert title == "# opslang" and len(first.split()) > 40 and not first.startswith(("#", "`", "["))
