"""Tables of commands: what is layout and falls away, what becomes another sign, what takes arguments that are no text.

A command that stands in no table stays in a formula as it is, and falls away from text with its arguments kept.
"""

from __future__ import annotations


def _named(words: str) -> frozenset[str]:
    return frozenset("\\" + word for word in words.split())


MATH_ENVIRONMENTS: dict[str, str] = {
    name + star: arguments
    for name, arguments in {
        "equation": "", "align": "", "gather": "", "multline": "", "flalign": "", "eqnarray": "", "alignat": "m",
        "xalignat": "m", "xxalignat": "m", "dmath": "o", "dgroup": "o", "IEEEeqnarray": "om", "darray": "m",
        "tikzcd": "o", "tikz-cd": "o", "math": "", "displaymath": "", "empheq": "o", "subeqn": "",
    }.items()
    for star in ("", "*")
}  # fmt: skip
"""Environments that begin mathematics in text, with the arguments that follow (o optional, m mandatory)."""

INNER_ENVIRONMENTS: dict[str, str] = {
    "array": "om", "aligned": "o", "gathered": "o", "split": "", "alignedat": "om", "tikzcd": "o", "tikz-cd": "o",
    "pmatrix": "o", "matrix": "o", "bmatrix": "o", "vmatrix": "o", "Bmatrix": "o", "Vmatrix": "o", "smallmatrix": "",
    "subarray": "m", "minipage": "oom", "alignat": "m", "alignat*": "m", "tabular": "om", "empheq": "om",
}  # fmt: skip
"""Arguments of environments inside mathematics; one that is missing here has none."""

TEXT_ENVIRONMENTS: dict[str, str] = {
    "figure": "o", "figure*": "o", "table": "o", "table*": "o", "wrapfigure": "omom", "itemize": "o", "enumerate": "o",
    "description": "o", "tabular": "om", "tabular*": "mom", "tabularx": "mm", "longtable": "om", "array": "om",
    "minipage": "oom", "multicols": "m", "thebibliography": "m", "tikzpicture": "o", "adjustbox": "m", "list": "mm",
    "sseqdata": "o", "sseqpage": "o", "center": "", "document": "", "frame": "<oo", "picture": "",
}  # fmt: skip
"""Arguments of environments of text that are no words; of any other the square bracket is its title."""

DROPPED_IN_MATH = _named(
    "left right middle big Big bigg Bigg bigl bigr bigm Bigl Bigr Bigm biggl biggr biggm Biggl Biggr Biggm "
    ", ; : ! > / - displaystyle textstyle scriptstyle scriptscriptstyle limits nolimits displaylimits "
    "notag nonumber qedhere qed pause mathstrut strut allowbreak nobreak relax protect leavevmode null xspace "
    " boldmath unboldmath "
    "             "
    "centering raggedright noindent indent hfil vfill medskip smallskip bigskip break linebreak pagebreak newpage "
    "thinspace medspace thickspace negthinspace negmedspace negthickspace enspace enskip "
    "tiny scriptsize footnotesize small normalsize large Large LARGE huge Huge upshape itshape bfseries mdseries "
    "begingroup endgroup displaybreak hline toprule midrule bottomrule crcr   "
    "expandafter noexpand unskip ignorespaces long global outer ignorespacesafterend textvisiblespace mathsurround "
    "nopagebreak uproot leftroot space nobreakspace"
)
"""Layout inside mathematics: the command goes, what it encloses stays."""

TRANSPARENT = _named(
    "mathop mathord mathbin mathrel mathopen mathclose mathpunct mathinner boldsymbol bm pmb mathclap mathrlap "
    "mathllap mathmbox smash boxed ensuremath lefteqn mathnormal shoveleft shoveright"
)
"""Layout around a group: command and braces go."""

BOUNDED = _named("choose over atop above brack brace rm bf it sf tt cal frak rmfamily")
"""Commands that reach to the braces around them, which must therefore stay."""

GAPS = _named("quad qquad hfill hspace hskip kern mkern mskip mspace hspace* dotfill")
"""Spaces; \\quad and wider may part two statements and become a gap."""

MEASURED = _named("hskip kern mkern mskip vskip raise lower")
"""Commands followed by a length without braces."""

DROPPED_ARGUMENTS: dict[str, str] = {
    "\\" + name: arguments
    for names, arguments in (
        ("label tag vphantom hphantom phantom vspace index marginparwidth nocite", "sm"),
        ("color pagecolor stepcounter refstepcounter theoremstyle thispagestyle pagestyle", "om"),
        ("cite citep citet citealt citealp Cite citeauthor citeyear autocite parencite textcite footcite", "soom"),
        ("ref eqref pageref cref Cref autoref vref nameref prettyref labelcref autocites", "som"),
        ("includegraphics bibliographystyle bibliography addbibresource graphicspath", "som"),
        ("setcounter addtocounter setlength addtolength numberwithin hypersetup markboth", "smm"),
        ("newtheorem", "smomo"),
        ("addcontentsline", "mmm"),
        ("declaretheorem", "omo"),
        ("geometry tikzset usetikzlibrary usetheme linespread hyphenation", "om"),
        ("definecolor colorlet", "mmm"),
        ("fontsize rule", "omm"),
        ("allowdisplaybreaks printbibliography", "o"),
        ("onslide", "<"),
    )
    for name in names.split()
}
"""Commands that go with their arguments: s star, o optional, m mandatory, < an overlay in angle brackets."""

UNWRAPPED: dict[str, str] = {
    "\\textcolor": "om", "\\colorbox": "om", "\\scalebox": "mo", "\\resizebox": "mm", "\\raisebox": "moo",
    "\\href": "", "\\hyperref": "o", "\\hyperlink": "m", "\\hypertarget": "m", "\\parbox": "ooom", "\\makebox": "oo",
    "\\only": "<", "\\uncover": "<", "\\visible": "<", "\\alert": "<", "\\rotatebox": "om", "\\adjustbox": "m",
    "\\multicolumn": "mm", "\\fcolorbox": "omm", "\\mathcolor": "om", "\\hl": "", "\\texorpdfstring": "",
}  # fmt: skip
"""Commands of which the last argument stays: what comes before it."""

NOTED: dict[str, str] = {
    "\\overset": "note", "\\underset": "note", "\\stackrel": "note", "\\stackunder": "note",
}  # fmt: skip
"""A note over or under a sign, and then the sign."""

BRACED_NOTES = _named("underbrace overbrace underbracket overbracket")

WORDS_IN_MATH = _named(
    "text mbox hbox textrm textnormal textup textmd textit textsl textsf textbf texttt textsc "
    "emph mathtext rlap llap clap fbox framebox"
)
"""Text inside mathematics."""

STYLES = {
    "\\mathrm": "rm", "\\operatorname": "rm", "\\operatornamewithlimits": "rm", "\\mathsf": "sf", "\\mathit": "it",
    "\\mathbf": "bf", "\\mathtt": "tt", "\\mathbb": "bb", "\\Bbb": "bb", "\\mathds": "bb", "\\mathbbm": "bb",
    "\\mathcal": "cal", "\\mathfrak": "frak", "\\mathscr": "scr", "\\mathup": "rm", "\\symbb": "bb", "\\symcal": "cal",
    "\\symbf": "bf", "\\symrm": "rm", "\\symscr": "scr", "\\symfrak": "frak", "\\symsf": "sf", "\\mathrsfs": "scr",
    "\\EuScript": "scr", "\\mathpzc": "scr", "\\mathbfcal": "cal",
}  # fmt: skip
"""Alphabets, for one argument."""

SWITCHES = {
    "\\rm": "rm", "\\sf": "sf", "\\it": "it", "\\bf": "bf", "\\tt": "tt", "\\cal": "cal", "\\frak": "frak",
    "\\rmfamily": "rm", "\\mit": "",
}  # fmt: skip
"""Alphabets, to the end of the group."""

ALIASES = {
    "\\le": "\\leq", "\\ge": "\\geq", "\\ne": "\\neq", "\\rightarrow": "\\to", "\\leftarrow": "\\gets",
    "\\lbrace": "\\{", "\\rbrace": "\\}", "\\Vert": "\\|", "\\land": "\\wedge", "\\lor": "\\vee", "\\owns": "\\ni",
    "\\lnot": "\\neg", "\\tfrac": "\\frac", "\\dfrac": "\\frac", "\\cfrac": "\\frac", "\\tbinom": "\\binom",
    "\\dbinom": "\\binom", "\\leqslant": "\\leq", "\\geqslant": "\\geq", "\\nicefrac": "\\frac", "\\sfrac": "\\frac",
    "\\longrightarrow": "\\to", "\\longmapsto": "\\mapsto", "\\dotsc": "\\dots",
    "\\dotsb": "\\dots", "\\dotsm": "\\dots", "\\dotsi": "\\dots", "\\dotso": "\\dots", "\\hdots": "\\dots",
    "\\textless": "<", "\\textgreater": ">",
}  # fmt: skip
"""Commands that print the same sign, or the same one larger: the left becomes the right."""

NEGATED = {"\\in": "\\notin", "\\ni": "\\notni", "\\mid": "\\nmid", "\\cong": "\\ncong"}
"""What \\not makes of a relation."""

OF_ITS_KIND: dict[str, tuple[str, str]] = {
    "\\vert": ("other", "|"), "\\lbrack": ("other", "["), "\\rbrack": ("other", "]"), "\\sp": ("sup", "^"),
    "\\sb": ("sub", "_"), "\\bgroup": ("open", "{"), "\\egroup": ("close", "}"), "\\lt": ("other", "<"),
    "\\gt": ("other", ">"), "\\ast": ("other", "*"), "\\slash": ("other", "/"), "\\prime": ("prime", "'"),
    "\\cr": ("row", "\\\\"), "\\tabularnewline": ("row", "\\\\"), "\\newline": ("row", "\\\\"),
    "\\backslash": ("command", "\\backslash"),
}  # fmt: skip
"""Commands that are another kind of token."""

PRINTED = {
    "\\%": "%", "\\$": "$", "\\#": "#", "\\_": "_", "\\&": "&", "\\{": "{", "\\}": "}", "\\ ": " ", "\\,": " ",
    "\\;": " ", "\\:": " ", "\\\n": " ", "\\quad": " ", "\\qquad": " ", "\\\\": " ", "\\newline": " ", "\\enspace": " ",
    "\\ss": "ß", "\\o": "ø", "\\O": "Ø", "\\l": "ł", "\\L": "Ł", "\\ae": "æ", "\\AE": "Æ", "\\oe": "œ", "\\aa": "å",
    "\\AA": "Å", "\\i": "ı", "\\j": "ȷ", "\\S": "§", "\\P": "¶", "\\dots": "…", "\\ldots": "…", "\\textendash": "–",
    "\\textemdash": "—", "\\LaTeX": "LaTeX", "\\TeX": "TeX", "\\textbackslash": "\\", "\\space": " ", "\\textless": "<",
    "\\textgreater": ">", "\\textasciitilde": "~", "\\textbar": "|", "\\slash": "/", "\\hskip": " ", "\\hfill": " ",
    "\\nobreakspace": " ", "\\cr": " ", "\\tabularnewline": " ",
}  # fmt: skip
"""What these commands print in text."""

ACCENTS = {
    "\\'": "\u0301", "\\`": "\u0300", "\\^": "\u0302", '\\"': "\u0308", "\\~": "\u0303", "\\=": "\u0304",
    "\\.": "\u0307", "\\u": "\u0306", "\\v": "\u030c", "\\H": "\u030b", "\\c": "\u0327", "\\d": "\u0323",
    "\\b": "\u0331", "\\r": "\u030a", "\\k": "\u0328",
}  # fmt: skip
"""Accents of text, as combining marks."""

ASIDES = {
    "\\footnote": "footnote", "\\footnotetext": "footnote", "\\thanks": "footnote", "\\endnote": "footnote",
    "\\caption": "caption", "\\subcaption": "caption", "\\captionof": "caption", "\\marginnote": "margin",
    "\\marginpar": "margin", "\\sidenote": "margin", "\\todo": "margin", "\\marginalnote": "margin",
}  # fmt: skip
"""Commands whose argument is a text of its own, and its place."""

SECTIONS = {
    "\\part": 0, "\\chapter": 1, "\\section": 2, "\\subsection": 3, "\\subsubsection": 4, "\\frametitle": 4,
    "\\paragraph": 5, "\\subparagraph": 6,
}  # fmt: skip
"""Headings and their depth."""

ARROWS = _named("ar arrow rar lar uar dar rrar drar dlar urar ular ddar uuar llar arrow*")
"""Arrows of diagrams."""


class Signs(dict[str, str | None]):
    """The kind of a character in mathematics; None for white space."""

    def __missing__(self, sign: str) -> str | None:
        if sign.isspace():
            kind = None
        elif sign.isdecimal():
            kind = "digit"
        elif sign.isalpha():
            kind = "letter"
        else:
            kind = "prime" if sign in "'’" else "other"
        if len(self) < 5000:
            self[sign] = kind
        return kind


SIGNS = Signs()
