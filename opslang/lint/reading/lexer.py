"""The first look at a TeX file: commands, braces, stretches of plain text, comments gone.

Knows characters; knows no command's meaning except those that change how characters are read
(\\verb, verbatim environments, \\url, \\makeatletter).  Every position is that of the file.

Kinds given here: run (plain text without a special sign), command, open, close, shift ($), sup, sub, align, param (#),
tie (~), par (blank lines), directive (an `% opslang:` comment).
"""

from __future__ import annotations

import re

from opslang.lint.reading.document import Token

_RULES = r"""
  (?P<run>(?:[^\\{{}}$%&^_#~\n]++|\n(?![ \t]*\n))++)
| (?P<url>\\(?:url|nolinkurl|path|href)\s*\{{[^{{}}\n]*\}})
| (?P<verb>\\(?:verb\*?|lstinline|Verb\*?|mintinline\s*(?:\[[^\]\n]*\])?\{{\w*\}})
      (?:(?P<bar>[^\w\s*{{\[=])[^\n]*?(?P=bar)|(?<!verb)(?<!verb\*)\{{[^{{}}\n]*\}}))
| (?P<begin>\\begin\s*\{{(?P<name>{opaque})\}})
| (?P<command>\\(?:(?P<word>[a-zA-Z{at}]+)(?:[ \t]*\n[ \t]*(?=\S)|[ \t]+)?|[^\n]|\n|\Z))
| (?P<open>\{{) | (?P<close>\}}) | (?P<shift>\$) | (?P<sup>\^) | (?P<sub>_) | (?P<align>&) | (?P<param>\#) | (?P<tie>~)
| (?P<directive>%+[ \t]*opslang:[^\n]*)
| (?P<comment>%[^\n]*(?:\n[ \t]*(?=\S))?)
| (?P<par>\n[ \t]*\n\s*)
| (?P<odd>[\s\S])
"""

OPAQUE = (
    "verbatim", "verbatim*", "Verbatim", "Verbatim*", "BVerbatim", "LVerbatim", "SaveVerbatim", "VerbatimOut", "alltt",
    "lstlisting", "minted", "comment", "filecontents", "filecontents*", "luacode", "luacode*", "pycode", "sagesilent",
    "asy", "mpcode", "gnuplot",
)  # fmt: skip
_DECLARED = re.compile(
    r"\\(?:DefineVerbatimEnvironment|lstnewenvironment|excludecomment|newverbatim|newminted)\s*\{(\w+)\}"
)

_HINTS = ("DefineVerbatim", "lstnewenv", "excludecomment", "newverbatim", "newminted")


def _compiled(names: tuple[str, ...], letters: str) -> re.Pattern[str]:
    return re.compile(_RULES.format(opaque="|".join(map(re.escape, names)), at=letters), re.VERBOSE)


_USUAL = (_compiled(OPAQUE, ""), _compiled(OPAQUE, "@"))


def lex(text: str, file: int, start: int = 0, end: int | None = None, package: bool = False) -> list[Token]:
    """The raw tokens of `text[start:end]`; `package` says that @ is a letter from the start."""
    declared = tuple(_DECLARED.findall(text)) if end is None and any(word in text for word in _HINTS) else ()
    rules = (_compiled(OPAQUE + declared, ""), _compiled(OPAQUE + declared, "@")) if declared else _USUAL
    stop = len(text) if end is None else end
    tokens: list[Token] = []
    letters = package
    at: int | None = start
    while at is not None and at < stop:
        at, letters = _stretch(text, file, at, stop, rules[letters], letters, tokens)
    return tokens


def _stretch(
    text: str, file: int, start: int, stop: int, rule: re.Pattern[str], letters: bool, tokens: list[Token]
) -> tuple[int | None, bool]:
    """Lex until the rules change or a stretch is jumped over; gives where to go on and whether @ is a letter."""
    new, kind_is, append = tuple.__new__, Token, tokens.append
    missing: set[str] = set()
    for found in rule.finditer(text, start, stop):
        kind = found.lastgroup
        begin, end = found.span()
        if kind == "command" or kind == "word":
            word = found.end("word")
            name = text[begin:word] if word > 0 else found.group()
            append(new(kind_is, ("command", name, begin, begin + len(name), file, "", None)))
            if name == "\\makeatletter" or name == "\\makeatother":
                return end, name == "\\makeatletter"
        elif kind == "begin" or kind == "name":
            name = found.group("name")
            close = -1 if name in missing else text.find("\\end{" + name + "}", end, stop)
            if close >= 0:
                append(new(kind_is, ("run", " ", begin, close + len(name) + 6, file, "", (file, begin, end))))
                return close + len(name) + 6, letters
            missing.add(name)
        elif kind == "comment":
            pass
        elif kind == "url" or kind == "verb" or kind == "bar" or kind == "odd":
            append(new(kind_is, ("run", " ", begin, end, file, "", (file, begin, end))))
        else:
            append(new(kind_is, (kind, found.group(), begin, end, file, "", None)))
    return None, letters
