"""Words that a draft calls admissible, in a sentence or in a list of a basis."""

from __future__ import annotations

import re
from collections.abc import Iterator

from opslang.lint.context.stream import SIGN
from opslang.lint.formula import statements_of
from opslang.lint.model import Finding, Known, Statement, Verdict
from opslang.lint.numeric.words import degree_of, inadmissible_at, is_dots, only_word, word_text
from opslang.lint.rule import Draft, LintRule

_CLAIM = re.compile(
    rf"(?P<names>{SIGN}(?:(?:,? and |, | or ){SIGN})*),? (?:is|are)(?: (?:also|again|both|all|clearly|"
    rf"certainly))? admissible\b"
    rf"|\b(?:words?|sequences?) (?P<names2>{SIGN}(?:(?:,? and |, | or ){SIGN})*) (?:is|are)(?: (?:also|again|"
    rf"both|all))? admissible\b",
    re.IGNORECASE,
)
_UNSURE = re.compile(r"\b(?:if|when|whenever|whether|unless|until|not|neither|nor)\b[^.]{0,60}$", re.IGNORECASE)
_BASIS = re.compile(r"\b(?:admissible|basis)\b", re.IGNORECASE)
_NOT_BASIS = re.compile(r"\b(?:not|in|non-?)\s*admissible|relations?\b", re.IGNORECASE)


def claims(draft: Draft) -> Iterator[Finding]:
    """Sentences that call a word admissible."""
    for paragraph in draft.paragraphs:
        if "admissible" not in paragraph.text:
            continue
        for claim in _CLAIM.finditer(paragraph.text):
            if _UNSURE.search(paragraph.text, max(0, claim.start() - 80), claim.start()):
                continue
            for sign in re.findall(SIGN, claim["names"] or claim["names2"]):
                for statement in statements_of(paragraph.formula(sign)):
                    yield from _claimed(statement)


def _claimed(statement: Statement) -> Iterator[Finding]:
    if statement.kind not in ("mention", "list"):
        return
    for side in statement.sides:
        read = only_word(side)
        if read is None or not read[0] or any(head != "Sq" for head, _ in read[0]):
            continue
        worn = inadmissible_at(read[0], 2)
        if worn is not None:
            message = f"{word_text(read[0])} is not admissible\n{worn[0]} < 2·{worn[1]}"
            yield Finding("inadmissible-word", "error", message, side.at)


def check(statement: Statement, known: Known) -> Verdict | None:
    """A list of words of one degree that is said to be a basis."""
    if statement.kind != "list" or known.prime != 2 or len(statement.sides) < 2:
        return None
    words = [only_word(side) for side in statement.sides if not is_dots(side)]
    if any(word is None or word[1] is not None or not word[0] for word in words):
        return None
    plain = [word[0] for word in words if word is not None]
    if (
        len({degree_of(word, 2) for word in plain}) != 1
        or not _BASIS.search(known.sentences)
        or _NOT_BASIS.search(known.sentences)
    ):
        return None
    findings = []
    for side, word in zip([side for side in statement.sides if not is_dots(side)], plain):
        worn = inadmissible_at(word, 2)
        if worn is not None:
            message = f"{word_text(word)} is not admissible, and stands in a list of a basis\n{worn[0]} < 2·{worn[1]}"
            findings.append(Finding("inadmissible-word", "error", message, side.at))
    return Verdict("finding", tuple(findings)) if findings else Verdict("true", reason="all words are admissible")


_HEAD = r"\newcommand{\Sq}{\mathrm{Sq}}"
RULE = LintRule(
    name="inadmissible-word",
    title="a word that is called admissible is not",
    why="Sq^{i_1} … Sq^{i_r} is admissible if i_j ≥ 2 i_{j+1}; the admissible words are the basis of the algebra.",
    bad=(
        _HEAD + r"The word $\Sq^5\Sq^3$ is admissible.",
        _HEAD + r"In degree $3$ the admissible words are $\Sq^3, \Sq^1\Sq^2$.",
    ),
    good=(
        _HEAD + r"The words $\Sq^6\Sq^3$ and $\Sq^5\Sq^2\Sq^1$ are admissible.",
        _HEAD + r"If $\Sq^5\Sq^3$ is admissible, then so are its parts.",
        _HEAD + r"The word $\Sq^5\Sq^3$ is not admissible.",
    ),
    check=check,
    draft=claims,
    rank=35,
    source="Serre 1953; Cartan 1954",
)
