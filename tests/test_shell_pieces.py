"""The shell without a terminal: results by number, undoing, saved scripts, completion, help, history, colours, TeX."""

from __future__ import annotations

import os
import re
import stat
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from command import ROOT, opslang
from hypothesis import given, settings
from hypothesis import strategies as st
from pygments.token import Token

from opslang.front import help as pages
from opslang.front.completion import SIGNS, World, offers
from opslang.front.glance import glance, reads_alike
from opslang.front.highlight import OpslangLexer
from opslang.front.history import LARGEST, Remembered, read, state_folder, written
from opslang.front.logbook import Expanded, Logbook
from opslang.front.pasting import displayed, on_one_line, opens_display
from opslang.front.prose import prose
from opslang.front.sitting import Sitting
from opslang.front.statement import Settings
from opslang.front.status import fitted, line
from opslang.front.vocabulary import SHELL_WORDS, shell_statement
from opslang.front.working import Stopped, Work
from opslang.ground.source import Source
from opslang.meaning.scope import Scope
from opslang.pipeline import Session
from opslang.report.render import cells
from opslang.syntax.spellings import STATEMENT_WORDS


class Heard:
    """A sitting whose words are kept."""

    def __init__(self, width: int = 80, **options: Any) -> None:
        self.said: list[str] = []
        self.screens = 0
        work = Work(self.said.append)
        self.sitting = Sitting(Settings(**options), work, self.said.append, self._page, lambda: width)

    def _page(self, text: str, screens: int) -> None:
        self.said.append(text)
        self.screens = screens

    def __call__(self, text: str) -> str:
        self.said.clear()
        for source in self.sitting.statements(text):
            self.sitting.answer(source)
        return "".join(self.said)

    def texts(self) -> list[str]:
        """The results, as the records write them."""
        from opslang.render.text import element_text

        return [
            element_text(e.outcome.element) for e in self.sitting.logbook.results() if e.outcome and e.outcome.element
        ]


def replayed(script: str) -> list[str]:
    """The results of a script that is run anew."""
    from opslang.render.text import element_text
    from opslang.syntax.layout import chunks

    session, found = Session(), []
    for source in chunks(script.split("\n"), "script"):
        outcome = session.run(source)
        assert outcome.verdict != "error", (source.text, outcome.diagnostics)
        if outcome.element is not None and (outcome.kind != "relation" or outcome.verdict == "false"):
            found.append(element_text(outcome.element))
    return found


# --- results by number ----------------------------------------------------------------------------


def test_a_result_is_named_by_that_and_by_its_number() -> None:
    heard = Heard()
    heard("let x in H^2\nSq^1 x\nx")
    assert heard("that") == "x                           degree 2   excess 0\n"
    assert heard("that_1 that_{2}").startswith("x Sq^1 x ")
    assert heard(r"\mathrm{Sq}^6 \left(that_1^2\right)").startswith("(Sq^1 x)^4 ")
    assert heard("let u = that_1") == ""
    assert heard("u + that_1").startswith("0 ")


def test_a_reference_that_does_not_hold_says_why() -> None:
    heard = Heard()
    assert "there is no result yet" in heard("Sq^1 that")
    heard("Sq^2 iota_3\nSq^1 iota_3")
    assert "there is no result 7" in heard("that_7") and "the results: 1 to 2" in heard("that_7")
    assert "cannot be declared" in heard("let that in H^2") and "cannot be declared" in heard("let that_1 = iota_2")
    heard("prime 3")
    assert "result 1 was found at the prime 2" in heard("that_1")
    assert heard("# that_1 is gone") == ""


def test_a_zero_keeps_its_degree_when_it_is_referred_to() -> None:
    heard = Heard()
    heard("Sq^5 iota_3")
    assert heard("Sq^2 that").split() == ["0", "degree", "10"]
    assert replayed(heard.sitting.logbook.script([]))[-1] == "0"


def test_a_message_about_a_reference_speaks_of_it_as_typed() -> None:
    heard = Heard()
    heard("Sq^2 iota_3")
    said = heard("Sq^1 that_1 + Sq^1")
    assert said.startswith("error: sorts-differ") and "`Sq^1 that_1` is a class" in said and "r_1" not in said
    marks = heard("that_1 + that_1 + zeta").splitlines()
    assert marks[1].index("zeta") == marks[2].index("~")


def test_a_result_keeps_its_value_in_another_space() -> None:
    """H^*(RP^4; F_2) = F_2[x]/(x^5), and x^4 = 0 in RP^2: Hatcher, Algebraic Topology, Theorem 3.19."""
    heard = Heard()
    heard("on RP^4\nx^4\non RP^2\nthat_1")
    assert heard("that").startswith("x^4 ")
    assert heard("that_2 = that_1").startswith("true") and heard("that_2 = 0").startswith("false")
    heard("that_1 + that_1 = that_2")
    assert heard("that").startswith("x^4 ") and heard("x^4").startswith("0 ")
    script = heard.sitting.logbook.script([])
    assert "on RP^2\nr_1\nlet r_2 = r_1\nr_2\n" in script and "let r_1 = x^4\non RP^2" in script
    assert replayed(script) == heard.texts()


def test_an_abbreviation_of_a_class_that_is_declared_anew_is_bound_by_its_name() -> None:
    heard = Heard()
    heard("let x in H^2\nlet u = x^2\nlet x in H^3\nu")
    assert heard("Sq^4 that").split()[:3] == ["x^4", "degree", "8"]
    heard("Sq^4 u = u^2 = u = 0")
    assert heard("that = u^2 + u").splitlines()[-1].startswith("true")
    assert replayed(heard.sitting.logbook.script([])) == heard.texts()


def test_a_line_that_fails_leaves_the_space_and_the_names_as_they_were() -> None:
    heard = Heard()
    heard("on RP^4\nlet z in H^2")
    assert "unknown-space" in heard("on RQ") and "error" in heard("let z, x in H^3")
    assert heard("x^4").startswith("x^4 ") and "degree 2" in heard("z")
    assert replayed(heard.sitting.logbook.script([])) == heard.texts()


def test_a_borrowed_name_is_no_class_of_a_space_chosen_meanwhile() -> None:
    heard = Heard()
    heard("Sq^2 iota_4\nthat\nspace R = F_2[r_1:2, r_2:1]\non R\nthat_1\nr_1")
    heard("on K(Z/2, 4)\nthat_1\nthat_2\nthat_4")
    assert heard.texts() == [*["Sq^2 iota_4"] * 3, "r_1", *["Sq^2 iota_4"] * 2, "r_1"]
    assert replayed(heard.sitting.logbook.script([])) == heard.texts()


def test_names_for_references_keep_out_of_the_way() -> None:
    heard = Heard()
    heard("let r_1, s_1 in H^2\nSq^2 iota_3")
    assert heard("r_1 that_1").startswith("r_1 Sq^2 iota_3")
    heard("let t_1 in H^4")
    assert "warning" not in heard("t_1 that_1")
    assert replayed(heard.sitting.logbook.script([])) == heard.texts()
    assert {key[:2] for key in heard.sitting.session.scope.names} == {("r", 1), ("s", 1), ("t", 1)}


@given(st.lists(st.sampled_from(["that", "that_1", "that_12", "that_{12}", "x", " ", "+", "Sq^2 "]), max_size=12))
@settings(deadline=None, max_examples=60)
def test_places_go_back_to_what_was_typed(pieces: list[str]) -> None:
    text = "|".join(pieces)
    logbook = Logbook()
    session = Session()
    for number in range(12):
        from opslang.front.logbook import Entry

        source = Source("input", f"Sq^{number + 1} iota_20")
        logbook.keep(Entry(source.text, source.text, "answer", Scope(), session.run(source)))
    line = logbook.expand(text, Scope())
    at = typed = 0
    for piece in pieces:
        name = next((e for e in line.edits if piece.startswith("that") and e[0] == typed), None)
        width = name[3] - name[2] if name else len(piece)
        assert line.typed_span((at, at + width)) == (typed, typed + len(piece))
        assert name is not None or line.text[at : at + width] == piece
        at += width + 1
        typed += len(piece) + 1
    assert Expanded("x").typed_span((0, 1)) == (0, 1)


# --- undoing and saving ---------------------------------------------------------------------------


def test_undo_takes_what_rests_on_the_declaration_and_nothing_else() -> None:
    heard = Heard()
    heard("let x in H^2\nSq^2 iota_5\nSq^1 x\nthat_2 + Sq^1 x\nthat_1\n basis H^4(K(Z/2, 2))\nwhy Sq^1 x")
    taken = heard.sitting.logbook.undo()
    assert taken is not None
    assert taken[0].text == "let x in H^2"
    assert [entry.typed.strip() for entry in taken[1]] == ["Sq^1 x", "that_2 + Sq^1 x", "why Sq^1 x"]
    assert replayed(heard.sitting.logbook.script([])) == ["Sq^2 iota_5", "Sq^2 iota_5"]
    assert heard.sitting.logbook.undo() is None


@pytest.mark.parametrize(
    "declaration", ["prime 3", "on K(Z, 3)", "space X = K(Z/2, 2)", "let x in H^5", "let x = iota_3^2"]
)
def test_undo_gives_the_scope_back(declaration: str) -> None:
    heard = Heard()
    heard("let x in H^2\nspace X = K(Z/4, 3)\non X")
    before = heard.sitting.session.scope
    known = (before.prime, before.space, dict(before.spaces), dict(before.names))
    heard(declaration)
    taken = heard.sitting.logbook.undo()
    assert taken is not None and taken[0].typed == declaration
    scope = taken[0].before
    assert (scope.prime, scope.space, scope.spaces, scope.names) == known


LINES = (
    "let x in H^2", "let x, y in H^3", "let u = Sq^1 x", "on K(Z/4, 3)", "prime 2", "prime 3", "on X", "Sq^2 x", "that",
    "space X = K(Z/2, 3) x K(Z/2, 3)", "x^2 + that", "that_1", "Sq^1 that_2", "Sq^2 Sq^2", "Sq^2 Sq^2 = Sq^3",
    "P^1 P^1", "beta_2 iota_3",
    "why x", "why that", "u that", "iota_3'", "basis H^4", "undo", "let r_1 in H^2", "# a remark",
    "on RP^4", "on RP^2", "x^4", "x^4 = x^3", "on R", "space R = F_2[r_1:2, r_2:1] / (r_2^3)", "r_1", "r_2^2",
)  # fmt: skip


@given(st.lists(st.sampled_from(LINES), min_size=4, max_size=16))
@settings(deadline=None, max_examples=100)
def test_whatever_was_said_the_saved_script_answers_alike(lines: list[str]) -> None:
    from opslang.front.glance import copy_of

    heard = Heard()
    for text in lines:
        if text == "undo":
            taken = heard.sitting.logbook.undo()
            if taken:
                heard.sitting.session.scope = copy_of(taken[0].before)
        elif text.startswith("#"):
            heard.sitting.remark(text)
        else:
            heard(text)
    entries = [e for e in heard.sitting.logbook.entries if e.role == "answer" and e.outcome]
    expected = [
        element
        for e in entries
        if e.outcome
        and e.outcome.element is not None
        and (e.outcome.kind != "relation" or e.outcome.verdict == "false")
        for element in [text_of(e.outcome.element)]
    ]
    assert replayed(heard.sitting.logbook.script([])) == expected


def text_of(element: Any) -> str:
    """An element as the records write it."""
    from opslang.render.text import element_text

    return element_text(element)


def test_a_name_that_a_reference_borrowed_may_be_declared_later() -> None:
    heard = Heard()
    heard("Sq^2 iota_3\nSq^1 that\nlet r_1 in H^2\nr_1\nthat_1")
    assert replayed(heard.sitting.logbook.script([])) == heard.texts()


def test_a_change_of_the_prime_and_back_costs_the_results_that_hold_declared_classes() -> None:
    heard = Heard()
    heard("let x in H^2\nSq^1 x\nSq^2 iota_4\nprime 3\nP^1\nprime 2")
    assert "result 1 was found before the prime was changed" in heard("that_1")
    assert heard("Sq^1 that_2").startswith("Sq^3 iota_4")
    assert heard("let x in H^2") == "" and heard("that_1").startswith("Sq^1 x")
    assert replayed(heard.sitting.logbook.script([])) == heard.texts()


# --- stopping -------------------------------------------------------------------------------------


def test_what_is_stopped_leaves_no_trace() -> None:
    heard = Heard()
    heard("let x in H^2\nSq^1 x")
    session = heard.sitting.session

    def halfway(source: Source) -> Any:
        Session.run(session, Source("input", "let x in H^9"))
        raise KeyboardInterrupt

    session.run = halfway  # type: ignore[method-assign]
    assert heard("let x in H^9") == "stopped after 0.0 s; the session goes on\n"
    assert heard.sitting.session is not session
    assert "degree 2" in heard("x")
    assert heard("that_1").startswith("Sq^1 x")


def test_a_fault_of_ours_does_not_end_the_sitting() -> None:
    heard = Heard()

    def broken(source: Source) -> Any:
        raise ZeroDivisionError("a planted fault")

    heard.sitting.session.run = broken  # type: ignore[method-assign]
    said = heard("Sq^1")
    assert "internal-fault" in said and "a planted fault" in " ".join(said.split())
    assert heard("Sq^2 iota_2").startswith("iota_2^2")


def test_work_says_how_it_goes_and_clears_up() -> None:
    from time import sleep

    said: list[str] = []
    work = Work(said.append)
    assert work.run(lambda: 3, lambda: "") == 3 and said == []
    work.run(lambda: sleep(0.75), lambda: " busy")
    assert re.fullmatch(r"\r\x1b\[K0\.\d s  busy", said[0]) and said[-1] == "\r\x1b[K"
    with pytest.raises(Stopped):
        work.run(interrupted, lambda: "")


def test_ctrl_c_is_not_lost_where_the_interpreter_drops_exceptions(monkeypatch: pytest.MonkeyPatch) -> None:
    """An exception in `__del__` is dropped (Python language reference, data model), Ctrl-C among them."""
    from signal import SIGINT, default_int_handler, raise_signal, signal

    class Dropping:
        def __del__(self) -> None:
            raise_signal(SIGINT)

    def job() -> None:
        from time import monotonic

        held = Dropping()
        del held
        end = monotonic() + 20
        while monotonic() < end:
            pass

    said: list[str] = []
    work = Work(said.append)
    monkeypatch.setattr("sys.unraisablehook", None)  # to be put back
    work.listen()
    try:
        with pytest.raises(Stopped) as stopped:
            work.run(job, lambda: "")
        assert stopped.value.seconds < 10
    finally:
        signal(SIGINT, default_int_handler)


def interrupted() -> None:
    """What Ctrl-C does to work."""
    raise KeyboardInterrupt


# --- what the input is ----------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("text", "words", "tone"),
    [
        ("Sq^4 Sq^2 iota_3", "class, degree 9", "quiet"),
        ("Sq^4 + Sq^2", "operation, of several degrees; the terms of this sum have different degrees: 2, 4", "warning"),
        ("2 3", "scalar", "quiet"),
        ("let x, y in H^2", "classes of degree 2", "quiet"),
        ("let u = Sq^2 iota_4", "class, degree 6", "quiet"),
        ("on K(Z/4, 3) x K(Z, 5)", "space with iota_3, iota_5", "quiet"),
        ("on K(Z/3, 3)", "a point at this prime", "quiet"),
        ("Sq^2 Sq^2 = Sq^3 Sq^1", "relation of operations, degree 4", "quiet"),
        ("Sq^2 = iota_2", "the left side is an operation, this side a class", "error"),
        ("why Sq^2 Sq^2", "derivation, operation, degree 4", "quiet"),
        ("prime 3", "the prime from here on", "quiet"),
        ("basis H^3(K(Z, 3))", "basis of one degree", "quiet"),
        ("space R = K(Z/2, 3) x K(Z, 2)", "a space", "quiet"),
        ("compare RP^4, CP^2 to 8", "a comparison of two spaces", "quiet"),
        ("map f : K(Z/2, 3) -> K(Z/2, 5) with iota_5 -> Sq^2 iota_3", "a map", "quiet"),
        ("bundle E of rank 3", "a vector bundle", "quiet"),
        ("Sq^2 omega", "omega is not declared", "error"),
    ],
)
def test_a_glance_says_what_a_statement_is(text: str, words: str, tone: str) -> None:
    scope = Scope()
    seen = glance(Source("input", text), scope)
    assert (seen.words, seen.tone) == (words, tone)
    assert scope == Scope()


def test_a_glance_computes_nothing() -> None:
    """(Sq^1 + Sq^2 + ... + Sq^64)^60 would take longer than anybody waits."""
    text = f"({' + '.join(f'Sq^{i}' for i in range(1, 65))})^60 iota_90"
    assert glance(Source("input", text), Scope()).words.startswith("class, of several degrees")


def test_the_bottom_line_fits_the_terminal() -> None:
    around = ["prime 2   on K(Z/4, 3) x K(Z, 5)", "prime 2"]
    for width in range(20, 100, 7):
        for words in ("", "class, degree 7", "a very long complaint " * 6, "ι" * 50):
            fragments = line(words, "error", "column 5", around, width)
            assert cells("".join(text for _, text in fragments)) < width
    assert fitted("abcdefghij", 8) == "abcde..." and fitted("\x1b[31m", 20) == "\\x1b[31m"


def test_what_the_line_says_of_references_and_pastes() -> None:
    heard = Heard()
    heard("Sq^2 iota_3")
    assert heard.sitting.look("Sq^1 that") == ("class, degree 6", "quiet", "")
    assert heard.sitting.look("that_4") == ("there is no result 4", "error", "column 1")
    assert heard.sitting.look("Sq^1 that_1 + Sq^2")[2] == "column 15"
    assert heard.sitting.look("Sq^2 (\n x +") == ("goes on in the next line", "quiet", "")
    assert heard.sitting.look("x\ny\n")[0] == "2 statements"
    assert heard.sitting.look("# nothing")[0] == "a comment"


def test_reading_alike() -> None:
    one, other = Scope(), Scope()
    session = Session()
    session.scope = other
    session.run(Source("input", "let x in H^2"))
    assert reads_alike("Sq^2 iota_3", one, other) and not reads_alike("x", one, other)
    session.run(Source("input", "prime 3"))
    assert not reads_alike("Sq^2 iota_3", one, other)


# --- completion -----------------------------------------------------------------------------------

WORLD = World(
    2, ("X", "Base"), {"x": "class", "omega": "class", "iota_3": "class", "w_1": "class", "w_12": "class"}, (1, 2)
)
BASES = ["BO", "BSO", "BSpin", "BU", "BSU", "BSp"]
NAMED = [*BASES, "RP^", "CP^", "HP^", "lens(", "thom("]


def offered(before: str, world: World = WORLD) -> list[str]:
    """What Tab offers."""
    return [offer.text for offer in offers(before, world, pages.names)]


@pytest.mark.parametrize(
    ("before", "expected"),
    [
        (r"Sq^2 \iota", ["ι"]),
        (r"\io", ["ι"]),
        (r"\beta", ["β"]),
        (r"\alpha", ["α"]),
        (r"\et", ["η"]),
        (r"\smil", ["∪"]),
        (r"\otim", ["⊗"]),
        (r"\times", ["×"]),
        ("ser", ["series "]),
        ("Sq^2 ser", []),
        ("on ", ["X", "Base", "K(Z/2, ", "K(Z, ", "K(Z/4, ", *NAMED]),
        ("on X x Ba", ["Base"]),
        ("series Ba", ["Base"]),
        ("on B", ["Base", *BASES]),
        ("on RP^3 x BS", ["BSO", "BSpin", "BSU", "BSp"]),
        ("on th", ["thom("]),
        ("on thom(B", BASES),
        ("on RP", ["RP^"]),
        ("on RP^", []),
        ("basis H^4(l", ["lens("]),
        ("compare CP^2, R", ["RP^"]),
        ("map f : RP^2 -> C", ["CP^"]),
        ("bundle E of rank 3 over H", ["HP^"]),
        ("Sq^1 w", ["w_1", "w_12"]),
        ("Sq^1 w_12", ["w_12"]),
        ("space Y = K", ["K(Z/2, ", "K(Z, ", "K(Z/4, "]),
        ("Sq^2 om", ["omega"]),
        ("Sq^2 th", ["that", "that_1", "that_2"]),
        ("x + iot", ["iota_3"]),
        ("notation l", ["latex"]),
        ("keys ", ["emacs", "vi"]),
        ("help exc", ["excess"]),
        ("copy that_", ["that_1", "that_2"]),
        ("undo ", []),
        ("space Y = K(Z/4, 2) x K(", []),
    ],
)
def test_tab_offers(before: str, expected: list[str]) -> None:
    assert offered(before) == expected


def test_operations_are_those_of_the_prime() -> None:
    assert "Sq^" in offered("") and "P^" not in offered("")
    assert "P^" in offered("", World(3)) and "Sq^" not in offered("", World(3))
    assert {f"{word} " for word in ("let", "on", "why")} <= set(offered("")) and set(SHELL_WORDS) <= set(offered(""))


def test_every_sign_reads_as_its_command() -> None:
    from opslang.syntax.spellings import COMMANDS, SYMBOLS

    for name, sign in SIGNS.items():
        if len(sign) == 1:
            kind, value = SYMBOLS.get(sign, ("", ""))
            assert (kind, value) == COMMANDS[name], name
    assert len(SIGNS) > 50


# --- help -----------------------------------------------------------------------------------------


@pytest.mark.parametrize("name", pages.names())
def test_every_topic_has_an_example_that_works(name: str) -> None:
    topic = pages.TOPICS[name]
    heard = Heard()
    assert topic.example or name in ("save", "read", "leave", "editing")
    for text in topic.example:
        if shell_statement(text) is None:
            heard(text)
            outcome = heard.sitting.logbook.entries[-1].outcome if heard.sitting.logbook.entries else None
            assert text.startswith("#") or (outcome is not None and outcome.verdict in ("ok", "true")), (
                text,
                heard.said,
            )
    page = pages.page(name, 40)
    assert page is not None and page.startswith(name)
    assert all(len(row) <= 40 for row in page.splitlines() if not row.startswith("  "))


def test_every_statement_has_help_and_every_example_its_answer() -> None:
    from opslang.syntax.spellings import KEYWORDS

    assert set(KEYWORDS) | set(SHELL_WORDS) <= set(pages.names())
    page = pages.page("Adem relations", 70)
    assert page is not None and "true    Sq^2 Sq^4 = Sq^6 + Sq^5 Sq^1" in page
    assert pages.page("sorts-differ", 70) and pages.page("no such thing", 70) is None
    assert "excess" in pages.like("exces")


def test_the_words_of_the_shell_are_no_names_of_the_language() -> None:
    from opslang.syntax.spellings import GREEK_NAMES, RESERVED

    for word in SHELL_WORDS:
        assert len(word) > 1 and word not in GREEK_NAMES and word not in RESERVED and word not in STATEMENT_WORDS


# --- history --------------------------------------------------------------------------------------


@given(st.text(alphabet=st.sampled_from("\\n\nx ι\udcff\"'"), max_size=12))
def test_an_input_comes_back_from_its_line(text: str) -> None:
    assert read(written(text)) == text and "\n" not in written(text)


def test_history_is_kept_for_its_user_alone_and_cut(tmp_path: Path) -> None:
    folder = tmp_path / "a" / "opslang"
    history = Remembered(str(folder))
    for text in ("Sq^1", "Sq^2 (\n x)", "Sq^2 (\n x)", "  ", "ι_3 \udcff"):
        history.append_string(text)
    assert list(Remembered(str(folder)).load_history_strings()) == ["ι_3 \udcff", "Sq^2 (\n x)", "Sq^1"]
    assert stat.S_IMODE(os.stat(folder / "history").st_mode) == 0o600
    with open(folder / "history", "ab") as file:
        file.write(b"Sq^3 iota_5\n" * (LARGEST // 10) + b"\xff\xfe\x00\n")
    assert next(iter(Remembered(str(folder)).load_history_strings())).startswith("\udcff")
    assert os.path.getsize(folder / "history") <= LARGEST // 2


def test_history_has_the_platform_s_own_place(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("HOME", "/home/someone")
    monkeypatch.delenv("XDG_STATE_HOME", raising=False)
    for platform, place in (
        ("linux", "/home/someone/.local/state/opslang"),
        ("darwin", "/home/someone/Library/Application Support/opslang"),
    ):
        monkeypatch.setattr("sys.platform", platform)
        assert state_folder() == place
    monkeypatch.setattr("sys.platform", "linux")
    monkeypatch.setenv("XDG_STATE_HOME", "relative")  # to be ignored: XDG base directory specification
    assert state_folder() == "/home/someone/.local/state/opslang"
    monkeypatch.setenv("XDG_STATE_HOME", "/var/state")
    assert state_folder() == "/var/state/opslang"
    monkeypatch.setattr("sys.platform", "win32")
    monkeypatch.setenv("LOCALAPPDATA", "/appdata")
    assert state_folder() == os.path.join("/appdata", "opslang")


def test_others_find_the_lexer_by_its_entry_point() -> None:
    import tomllib

    from pygments import highlight
    from pygments.formatters import HtmlFormatter

    project = tomllib.loads((ROOT / "pyproject.toml").read_text())["project"]
    module, name = project["entry-points"]["pygments.lexers"]["opslang"].split(":")
    assert (module, name) == (OpslangLexer.__module__, OpslangLexer.__name__)
    assert '<span class="nf">Sq</span>' in highlight("Sq^2 iota_3", OpslangLexer(), HtmlFormatter())


# --- colours --------------------------------------------------------------------------------------


def corpus() -> list[str]:
    """Everything at hand that is written in the language."""
    scripts = [path.read_text() for path in (ROOT / "examples").rglob("*.ops")]
    scripts += [line for topic in pages.TOPICS.values() for line in topic.example]
    return [
        *scripts,
        r"$\mathrm{Sq}^{2}\left(\iota_3 \smile \beta_2 x'\right) = \mathcal{P}^1 \, y,$ % note",
        "Sq⁴² ι₃ ∪ β x ⊗ y″ ∈",
    ]


def test_no_line_of_the_language_is_an_error_to_the_lexer() -> None:
    for text in corpus():
        assert not [value for kind, value in OpslangLexer().get_tokens(text) if kind is Token.Error], text


@pytest.mark.parametrize(
    ("text", "value", "kind"),
    [
        ("let x in H^2", "let", Token.Keyword),
        ("let x in H^2", "in", Token.Keyword),
        ("Sq^2 iota_3", "Sq", Token.Name.Function),
        ("Sq^2 iota_3", "iota", Token.Name.Builtin),
        (r"\mathrm{Sq}^2", r"\mathrm{Sq}", Token.Name.Function),
        (r"\beta", r"\beta", Token.Name.Function),
        ("P^1 beta", "beta", Token.Name.Function),
        ("# note", "# note", Token.Comment.Single),
        ("undo", "undo", Token.Keyword.Pseudo),
        ("Sq^1 that_3", "that_3", Token.Name.Builtin),
        ("x + alpha", "alpha", Token.Name.Variable),
        ("on K(Z/2, 3)", "K", Token.Name.Class),
        ("x ? y", "?", Token.Error),
    ],
)
def test_colours(text: str, value: str, kind: Any) -> None:
    assert (kind, value) in list(OpslangLexer().get_tokens(text))


# --- displays of TeX files ------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("$$\na\n = b.\n$$", [("a\n = b.", 2)]),
        ("\\[ a = b \\],", [("   a = b", 1)]),
        (
            "\\begin{align*}\n a &= b \\\\\n  &= c, \\\\ d &= e \\label{x}\n\\end{align*}",
            [(" a &= b \\\\\n  &= c, \\\\", 2), ("           d &= e", 3)],
        ),
        (
            "\\begin{equation}\\label{e}\n\\begin{split} a &= b \\\\ &+ c \\end{split}\n\\end{equation}.",
            [("              a &= b \\\\ &+ c", 2)],
        ),
        ("\\begin{gather}\na = b \\\\[2pt]\nc = d\n\\end{gather}", [("a = b \\\\[2pt]", 2), ("c = d", 3)]),
    ],
)  # fmt: skip
def test_a_display_is_cut_into_statements(text: str, expected: list[tuple[str, int]]) -> None:
    found = displayed(text, "input")
    assert found is not None and [(source.text, source.first_line) for source in found] == expected
    assert not opens_display(text)


@pytest.mark.parametrize("text", ["Sq^2 x", "$a$", "$a$ + $b$", "x [2]", "let x in H^2\n$$a$$"])
def test_other_texts_are_no_displays(text: str) -> None:
    assert displayed(text, "input") is None


def test_displays_are_answered_and_saved() -> None:
    heard = Heard()
    text = (
        "\\begin{align}\n  \\mathrm{Sq}^2\\mathrm{Sq}^2 \\iota_3 % by Adem\n"
        "   &= \\mathrm{Sq}^3\\mathrm{Sq}^1 \\iota_3, \\label{a} \\\\\n"
        "  \\mathrm{Sq}^2 \\iota_2 \\\\\n \\mathrm{Sq}^4 \\iota_3 &= \\omega\n\\end{align}"
    )
    assert heard.sitting.complete(text) and not heard.sitting.complete(text[:-10])
    said = heard(text)
    assert "true " in said and "iota_2^2" in said and "line 5: error: unknown-name" in said
    assert replayed(heard.sitting.logbook.script([])) == ["iota_2^2"]
    assert on_one_line(" a\n  = b") == "a = b"


PROSE = "By Adem the relation\n  $Sq^2 Sq^2 = Sq^3 Sq^1$ implies, where\n$k$ is even, that $Sq^1 Sq^1$ is 0."


def test_prose_is_left_out_and_its_formulas_are_taken() -> None:
    found = prose(PROSE, "input")
    assert found is not None and found.names == ("k",)
    assert [source.text.strip() for source in found.sources] == ["Sq^2 Sq^2 = Sq^3 Sq^1", "Sq^1 Sq^1"]
    assert [source.first_line for source in found.sources] == [2, 3]
    for source in found.sources:
        assert PROSE.splitlines()[source.first_line - 1].startswith(
            source.text.strip(), len(source.text) - len(source.text.lstrip())
        )
    assert found.words == "the words around the formulas are left out, and so is k, named only"
    display = prose("We have\n\\[ Sq^1 Sq^1 = 0 \\]\nand \\(Sq^2\\), so", "input")
    assert display is not None and [source.text.strip() for source in display.sources] == ["Sq^1 Sq^1 = 0", "Sq^2"]
    only = prose("the class $k$", "input")
    assert only is not None and [source.text.strip() for source in only.sources] == ["k"] and not only.names


@pytest.mark.parametrize(
    "text",
    [
        "let $x$ in $H^2$",
        "why $Sq^2 Sq^2$",
        "$a$ + $b$",
        "series $K(Z/2, 3)$ to 9",
        "$Sq^1 that$",
        "on $RP^4$ # the space we mean",
        "$Sq^2 Sq^2$",
        "Sq^2 $\\iota_3$",
        "\\mathrm{Sq}^2 x",
        "the relation Sq^2 Sq^2",
        "costs 5$",
    ],
)
def test_other_texts_are_no_prose(text: str) -> None:
    assert prose(text, "input") is None


def test_prose_declares_the_classes_it_places() -> None:
    heard = Heard()
    said = heard(
        r"Let $x, y\in H^2(X; \mathbb{Z}/2)$ and $\zeta \in H^3(X;\mathbb Z)$; then $Sq^2 (xy) = Sq^1 \zeta$ is false"
    )
    assert "error" not in said and said.startswith("false"), said
    assert heard("y").startswith("y ") and heard("Sq^1 zeta").startswith("0 ")


def test_prose_is_answered() -> None:
    heard = Heard()
    assert heard.sitting.complete(PROSE) and heard.sitting.complete("$k$ is even if $Sq^1$")
    said = heard(PROSE)
    assert said.startswith("true ") and "0      " in said and "k is not declared" not in said
    assert heard.sitting.look(PROSE)[0] == "2 statements"
    assert "line 2: error" in heard("Then\n$Sq^1 zz$ is 0") and replayed(heard.sitting.logbook.script([])) == ["0"]


# --- files ----------------------------------------------------------------------------------------


def asked(heard: Heard) -> Callable[[str], bool]:
    """The statements of the shell, without a prompt."""
    from opslang.front.requests import Requests

    requests = Requests(heard.sitting, None, lambda text, _: heard.said.append(text))  # type: ignore[arg-type]

    def do(text: str) -> bool:
        heard.said.clear()
        own = shell_statement(text)
        assert own is not None
        return requests.do(*own, Source("input", text))

    return do


def test_saving_and_reading(tmp_path: Path) -> None:
    heard = Heard(prime=3, limit=9_000_000)
    do = asked(heard)
    heard("let x in H^4\nP^1 x\nP^1 that")
    name = str(tmp_path / "a.ops")
    assert do(f"save {name}") and heard.said[-1] == f"5 statements saved in {name}\n" and not do(f"save {name}")
    assert f"`save over {name}` replaces it" in heard.said[-1]
    assert do(f"save over {name}") and not do("save") and not do(f"save {tmp_path}/none/a.ops")
    head = (tmp_path / "a.ops").read_text().splitlines()[:3]
    assert head == ["# a session of the opslang shell", "# to be run with --limit 9000000", "prime 3"]
    assert opslang("run", name).out.splitlines()[-1].startswith(heard.texts()[-1])
    again = Heard()
    assert asked(again)(f"read {name}") and again.texts() == heard.texts()
    assert not asked(again)(f"read {tmp_path}/none.ops") and "there is no file of that name" in again.said[-1]
    (tmp_path / "bad.ops").write_text("P^1\nhelp\nP^1 P\nP^2\n")
    assert not asked(again)(f"read {tmp_path}/bad.ops")
    assert "stopped at line 3" in again.said[-1] and len(again.texts()) == len(heard.texts()) + 1


def test_what_is_declared_names_the_classes_of_named_spaces() -> None:
    """Hatcher, Algebraic Topology, Theorem 3.19; Milnor and Stasheff, Characteristic Classes, Theorems 7.1 and 14.5."""
    for prime, space, names in (
        (2, "BSO(5)", "w_2 … w_5"),
        (2, "CP^3", "y"),
        (2, "thom(BU(2))", "U, and U times c_1 … c_2"),
        (3, "lens(9)", "x, y"),
        (3, "RP^2 x K(Z/3, 2)", "iota_2"),
        (2, "RP^3 x K(Z/2, 2) x RP^2", "iota_2, x, x'"),
        (3, "RP^2", "a point at this prime"),
    ):
        heard = Heard(prime=prime)
        heard(f"on {space}")
        assert asked(heard)("declared") and heard.said[-1].splitlines()[1].endswith(f": {names}"), (space, heard.said)


def test_a_question_mark_is_help_and_explain_explains() -> None:
    heard = Heard()
    do = asked(heard)
    assert do("help") and do("?")
    listed = heard.said[-1]
    assert do("help") and heard.said[-1] == listed
    for text in ("? excess", "?excess", " ?  excess ", "excess?"):
        if shell_statement(text):
            assert do(text) and heard.said[-1].startswith("excess\n")
    assert do("explain sorts-differ") and heard.said[-1].startswith("sorts-differ: ")
    assert heard.said[-1].splitlines() == opslang("explain", "sorts-differ", "--width", "80").out.splitlines()
    assert do("explain") and "sorts-differ" in heard.said[-1] and "opslang explain" not in heard.said[-1]
    assert not do("explain sorts-difer") and "sorts-differ" in heard.said[-1]


def test_the_words_that_leave() -> None:
    heard = Heard()
    for text in ("leave", "quit", "exit", "q", " q "):
        assert heard.sitting.own(text) == ("leave", "")
    assert heard.sitting.look("q")[:2] == ("write: leave", "quiet")
    heard("let q in H^2")
    assert heard.sitting.own("q") is None and heard("q").startswith("q ")


def test_only_what_is_asked_for_is_shown_by_pages() -> None:
    heard = Heard()
    shown = heard("series K(Z/2, 3) to 4000")
    lines = shown.rsplit("\r\x1b[K", 1)[-1].splitlines()
    assert heard.screens > 1 and len(lines) < 2500 and all(len(line) <= 80 for line in lines)
    assert lines[0].startswith("0: 1  ")
    heard("why Sq^2 Sq^2")
    assert heard.screens == 1


def test_misuse_is_answered_by_the_use() -> None:
    heard = Heard()
    do = asked(heard)
    for text in (
        "notation roman",
        "limit x",
        "limit 0",
        "copy x",
        "undo all",
        "copy",
        "copy that",
        "undo",
        "help me",
        "why",
    ):
        assert not do(text) and heard.said, text
    assert do("limit 100") and "limit 100" in heard.said[-1]
    assert "too-large" in heard("(Sq^1 + Sq^2 + Sq^4 + Sq^8 + Sq^16)^20")
