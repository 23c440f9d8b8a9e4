"""The pages of `help`: finds a topic, sets its text, and shows its example with the answers it gives here and now.

Knows no terminal.
"""

from __future__ import annotations

from difflib import get_close_matches
from textwrap import wrap

from opslang.front.help_statements import SHELL, STATEMENTS, Topic
from opslang.front.help_terms import TERMS
from opslang.front.vocabulary import SHELL_WORDS, shell_statement

TOPICS: dict[str, Topic] = {**TERMS, **STATEMENTS, **SHELL}
_ALSO = {also: name for name, topic in TOPICS.items() for also in topic.also}


def names() -> list[str]:
    """The topics, statements first."""
    return [*STATEMENTS, *SHELL, *TERMS]


def listing(width: int) -> str:
    """All topics."""
    lines = []
    for title, table in (("Statements", STATEMENTS), ("In the shell", SHELL), ("Terms", TERMS)):
        lines += [
            title,
            *wrap(
                ",  ".join(name.replace(" ", "\0") for name in table),
                width,
                initial_indent="  ",
                subsequent_indent="  ",
            ),
        ]
    return (
        "\n".join(lines).replace("\0", " ")
        + "\n\n"
        + "\n".join(wrap("`help excess` opens one of them; `explain` lists diagnostics and laws.", width))
    )


def page(name: str, width: int) -> str | None:
    """The page of a topic, or of a diagnostic or a law; None where nothing goes by that name."""
    wanted = " ".join(name.strip("`'\"").split()).lower()
    found = wanted if wanted in TOPICS else _ALSO.get(wanted)
    if found is None:
        begun = {_ALSO.get(topic, topic) for topic in (*TOPICS, *_ALSO) if topic.startswith(wanted)}
        found = begun.pop() if len(begun) == 1 and len(wanted) > 2 else None
    if found is None:
        from opslang.front.explain import explain

        return explain(name.strip(), width)
    topic = TOPICS[found]
    lines = [found, "", *wrap(topic.text, width)]
    if found in SHELL_WORDS:
        lines += ["", *wrap(f"Write: {SHELL_WORDS[found]}", width)]
    if topic.example:
        lines += ["", "Example:", *_example(topic.example, width)]
    return "\n".join(lines)


def like(name: str) -> list[str]:
    """Topics that a mistyped name may stand for."""
    from opslang.front.explain import names as explained

    return get_close_matches(name.lower(), [*TOPICS, *_ALSO, *explained()], 3, 0.6)


def _example(lines: tuple[str, ...], width: int) -> list[str]:
    """The lines of an example, each with what it answers; statements of the shell stand without."""
    from opslang.ground.source import Source
    from opslang.pipeline import Session
    from opslang.render.show import show

    if any(shell_statement(line) or "that" in line for line in lines):
        return [f"  {line}" for line in lines]
    session = Session()
    found = []
    for line in lines:
        found.append(f"  {line}")
        answer = show(session.run(Source("example", line)), "text", width - 6)
        found += [f"      {row}" for row in answer.splitlines()]
    return found
