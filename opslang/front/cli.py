"""The command line: names of commands and options, and nothing else.

Everything heavy is loaded by the command that needs it, so that a single line is answered at once.
"""

from __future__ import annotations

import sys
from collections.abc import Callable
from typing import Any, TypeVar

import click
from attrs import evolve

from opslang import __version__

Command = TypeVar("Command", bound=Callable[..., Any])

OUTPUTS = ("text", "unicode", "latex", "jsonl")
COLOURS = ("auto", "always", "never")


def _prime(context: click.Context, parameter: click.Parameter, value: int) -> int:
    from opslang.ground.arith import is_prime

    if not is_prime(value):
        raise click.BadParameter(f"{value} is not a prime")
    return value


_SHARED = (
    click.option(
        "--output", type=click.Choice(OUTPUTS), default="text", show_default=True, help="How to write results."
    ),
    click.option("--prime", type=int, default=2, show_default=True, callback=_prime, help="The prime to begin with."),
    click.option("--limit", type=click.IntRange(min=1), help="Terms that a computation may hold before it is refused."),
    click.option("--width", type=click.IntRange(min=20), help="Columns of text; the terminal's, or 80."),
    click.option("--both", is_flag=True, help="Compute by tables and by rewriting, and report any difference."),
    click.option("--colour", "--color", type=click.Choice(COLOURS), default="auto", help="Colour for diagnostics."),
)


def _shared(command: Command) -> Command:
    for option in reversed(_SHARED):
        command = option(command)
    return command


@click.group(invoke_without_command=True, context_settings={"help_option_names": ["--help"]})
@click.version_option(__version__, prog_name="opslang", message="%(prog)s %(version)s")
@click.pass_context
def opslang(context: click.Context) -> int:
    """Cohomology operations: scripts of relations in, canonical admissible forms out.

    Exit status: 0 all well; 1 a relation is false or undecided; 2 an error in the input or its use;
    130 after an interrupt.
    """
    if context.invoked_subcommand is not None:
        return 0
    from opslang.front.entrance import shell as enter

    return enter()


@opslang.command()
@click.argument("scripts", metavar="SCRIPT...", nargs=-1, required=True)
@click.option("--jobs", type=click.IntRange(min=1), default=1, show_default=True, help="Processes to share the work.")
@_shared
def run(scripts: tuple[str, ...], jobs: int, **shared: Any) -> int:
    """Run scripts, one after another; `-` is standard input.

    Every expression is normalised, every relation decided.  Each script begins afresh.
    """
    from opslang.front.batch import run as run_scripts
    from opslang.front.batch import settings_for

    return run_scripts(scripts, evolve(settings_for(**shared), echo=True), jobs)


@opslang.command(name="eval", context_settings={"ignore_unknown_options": True})
@click.argument("expressions", metavar="EXPR...", nargs=-1, required=True)
@click.option("--on", "space", metavar="SPACE", help="As in --on 'K(Z/2, 3)'.")
@click.option(
    "--let", "declared", metavar="DECLARATION", multiple=True, help="As in --let 'x in H^2'; may be repeated."
)
@_shared
@click.pass_context
def evaluate(
    context: click.Context, /, expressions: tuple[str, ...], space: str | None, declared: tuple[str, ...], **shared: Any
) -> int:
    """Answer lines given on the command line."""
    from opslang.front.batch import evaluate as evaluate_all
    from opslang.front.batch import named, settings_for
    from opslang.ground.source import Source

    for text in expressions:  # an expression may begin with a minus sign, but hardly with two and a letter
        if text.startswith("--") and text[2:3].isalpha():
            raise click.NoSuchOption(text, possibilities=_like(text, context), ctx=context)
    prelude = [Source("--on", f"on {space}")] if space is not None else []
    prelude += [Source("--let", f"let {text}") for text in declared]
    return evaluate_all(tuple(prelude), named(expressions), settings_for(**shared))


@opslang.command()
@click.argument("paths", metavar="PATH...", nargs=-1)
@click.option(
    "--output",
    type=click.Choice(("text", "jsonl", "sarif")),
    default="text",
    show_default=True,
    help="How to write findings.",
)
@click.option("--mend", is_flag=True, help="Write the mends that are certain into the files.")
@click.option("--coverage", is_flag=True, help="Say of each formula whether it was checked, and why not.")
@click.option("--why", is_flag=True, help="Show the derivation behind each finding (in SARIF: as a property).")
@click.option("--explain", metavar="NAME", help="Say what a finding of this name is, and nothing else.")
@click.option("--since", metavar="DATE|REVISION", help="Only files changed since then, or since that git revision.")
@click.option("--jobs", type=click.IntRange(min=1), help="Processes to share the files; 2 where there are many.")
@click.option("--cluster", metavar="ENGINE", help="Share the files by joblib: loky, or a dask scheduler's address.")
@click.option("--cache/--no-cache", default=True, show_default=True, help="Keep results of files that do not change.")
@click.option("--as", "name", metavar="NAME", default="-", help="The name of what comes on standard input (`-`).")
@click.option("--width", type=click.IntRange(min=20), help="Columns of text; the terminal's, or 80.")
@click.option("--colour", "--color", type=click.Choice(COLOURS), default="auto", help="Colour for findings.")
@click.pass_context
def lint(context: click.Context, /, paths: tuple[str, ...], explain: str | None, **asked: Any) -> int:
    """Check the formulas of drafts: TeX, Markdown, MyST, notebooks, and folders of them.

    `-` is standard input.  Nothing is changed without --mend.  Exit status: 0 nothing found; 1 findings; 2 a file
    could not be read.
    """  # fmt: skip
    from opslang.front import lint as linter
    from opslang.front.lint_files import BadSince

    if explain is not None:
        return context.invoke(_explain_command, name=explain, width=asked["width"])  # type: ignore[no-any-return]
    if not paths:
        raise click.MissingParameter(ctx=context, param_hint="'PATH...'", param_type="argument")
    try:
        return linter.run(paths, linter.LintSettings(**asked))
    except BadSince as trouble:
        what = f"{str(trouble)!r} is neither a date (2026-03-01) nor a revision of a git repository here"
        raise click.BadParameter(what, ctx=context, param_hint="--since") from trouble
    except linter.NoCluster as trouble:
        raise click.BadParameter(str(trouble), ctx=context, param_hint="--cluster") from trouble


@opslang.command()
@click.argument("name", required=False)
@click.option("--width", type=click.IntRange(min=20), help="Columns of text; the terminal's, or 80.")
@click.pass_context
def explain(context: click.Context, name: str | None, width: int | None) -> int:
    """Say what a diagnostic or a law is.

    Without a name all of them are listed.
    """
    from opslang.front import explain as page
    from opslang.front.output import print_result, width_of

    columns = width or width_of(sys.stdout)
    if name is None:
        return print_result(page.listing(columns))
    text = page.explain(name, columns)
    if text is None:
        raise click.BadParameter(_unknown(name, page.names()), ctx=context, param_hint="NAME")
    return print_result(text)


_explain_command = explain


@opslang.command()
@click.option(
    "--keys", type=click.Choice(("emacs", "vi")), default="emacs", show_default=True, help="Keys of the editor."
)
@_shared
def shell(keys: str, **shared: Any) -> int:
    """Ask and be answered, line by line.

    What does not come from a terminal is run as a script.
    """
    from opslang.front.entrance import shell as enter

    return enter(keys, **shared)


def _like(word: str, context: click.Context) -> list[str]:
    from difflib import get_close_matches

    known = [option for parameter in context.command.params for option in parameter.opts if option.startswith("--")]
    return get_close_matches(word, known)


def _unknown(name: str, known: list[str]) -> str:
    from difflib import get_close_matches

    near = get_close_matches(name, known)
    hint = f" Did you mean {' or '.join(near)}?" if near else " `opslang explain` lists all names."
    return f"no diagnostic and no law is called {name!r}.{hint}"


def main(arguments: list[str]) -> int:
    """Runs one command line and gives its exit status."""
    try:
        status = opslang.main(arguments, prog_name="opslang", standalone_mode=False)
    except click.ClickException as misuse:
        misuse.show()
        return 2
    except (click.Abort, KeyboardInterrupt):
        return 130
    except SystemExit:  # the reader of a help page has left: that is how click says so
        return 0
    except OSError as trouble:  # a help page that cannot be written
        from opslang.front.output import failure, report

        return report(failure(trouble))
    return status if isinstance(status, int) else 0
