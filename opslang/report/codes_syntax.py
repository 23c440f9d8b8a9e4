"""Diagnostic names of reading: what a line can lack before anything in it has a meaning."""

from __future__ import annotations

from opslang.report.code import Code

SYNTAX_CODES: dict[str, Code] = {
    "expected": Code(
        title="Something else was expected here",
        explanation=(
            "The line cannot be read on from this place.  The message says what could stand there, and for a statement "
            "with a keyword the help says how it is written."
        ),
        example="Sq^2 iota_3 + * Sq^1 iota_4",
    ),
    "unknown-statement": Code(
        title="No statement begins like this",
        explanation=(
            "The line begins with a word that is no keyword, or declares a class without `let`.  The keywords "
            "are prime, space, on, let, why, basis, series, map, bundle and compare; every other line is an "
            "expression or a relation."
        ),
        example="lte x in H^2",
    ),
    "not-yet-supported": Code(
        title="The language has this, this version does not read it",
        explanation=(
            "Maps, bundles, manifolds, families `for all`, sums over a variable, and the statements "
            "kernel, image, rank, solve, relations and compare belong to the language, and so do Pontryagin squares.  "
            "They are recognised, so that they are never read as something else."
        ),
        example="kernel Sq^2 on H^5(K(Z/2, 3))",
    ),
    "run-of-letters": Code(
        title="Several letters that are no name",
        explanation=(
            "Names are single letters and spelled Greek letters; a keyword begins a line of its own.  A product is "
            "written with spaces or signs between "
            "its factors (`x y`, `x * y`).  In TeX spelling, as in TeX, letters side by side are a product."
        ),
        example="let x, y in H^2\nxy",
    ),
    "index-place": Code(
        title="A number that stands where an index should be raised or lowered",
        explanation=(
            "The degree of a square or a power stands above (`Sq^4`, `P^1`), every other index below (`iota_3`, "
            "`beta_2`, `Q_1`, `x_3`).  `Sq 4` could be the total square of 4, so it is not read at all."
        ),
        example="Sq4 iota_5",
    ),
    "missing-index": Code(
        title="A symbol that needs an index has none",
        explanation="A fundamental class has its degree below (`iota_3`), Milnor's primitive its number (`Q_1`).",
        example="Sq^2 iota",
    ),
    "two-powers": Code(
        title="Two powers behind one symbol",
        explanation="`Sq^2^2` may be meant as (Sq^2)^2 or as Sq^{2^2}: write the one that is meant.",
        example="Sq^2^2",
    ),
    "misplaced-script": Code(
        title="Something above or below a symbol that has no meaning there",
        explanation=(
            "A square or a power has indices above and none below; numbers and brackets have powers only; a prime "
            "stands before the power; no symbol has two indices below."
        ),
        example="Sq^4_2 iota_5",
    ),
    "many-indices": Code(
        title="Several indices where one is wanted",
        explanation="Only squares and powers take several indices: `Sq^{4,2,1}` is Sq^4 Sq^2 Sq^1.",
        example="iota_{3,2}",
    ),
    "index-numbers": Code(
        title="Numbers side by side in an index",
        explanation=(
            "`Sq^{4 2}` could be the square of degree 8, that of degree 42, or the word Sq^4 Sq^2, so it is not read: "
            "write `Sq^{4*2}`, `Sq^{42}` or `Sq^{4,2}`.  A number beside a letter is a product: `Sq^{2n}`."
        ),
        example="Sq^{4 2 1} iota_5",
    ),
    "index-not-integer": Code(
        title="An index that is no integer",
        explanation="Index positions hold integers; a negative power, as in 2^{-1}, is none.",
        example="Sq^{2^{-1}}",
    ),
    "number-too-large": Code(
        title="A number beyond the limit",
        explanation=(
            "Numbers are written with up to 4,000 digits; an index may be worth up to 14,000 binary ones, and be made "
            "of up to 2,000 symbols.  Larger ones, such as 2^{10^9}, are not computed."
        ),
        example="Sq^{2^{10^9}}",
    ),
    "group-number": Code(
        title="A group whose order or number of copies is no number",
        explanation=(
            "In `Z/m` and `(Z/m)^k` both m and k are numbers, 0 or more; in `Z_(p)`, Z localised at p, p is a prime."
        ),
        example="on K(Z/n, 3)",
    ),
    "bad-name": Code(
        title="What stands behind `let` is no name",
        explanation=(
            "A class is named by a letter or a Greek letter, with an index below and primes; a power names nothing."
        ),
        example="let x^2 in H^4",
    ),
    "name-taken": Code(
        title="A name that the language keeps for itself",
        explanation="Sq, P, beta, chi, Q and iota name operations and fundamental classes.",
        example="let P in H^2",
    ),
    "chi-brackets": Code(
        title="chi without brackets",
        explanation=(
            "The conjugation takes its operation in brackets, `chi(Sq^4)`: without them it cannot be seen how far it "
            "reaches."
        ),
        example="chi Sq^4",
    ),
    "unclosed-bracket": Code(
        title="A bracket that is never closed",
        explanation=(
            "A statement goes on over the ends of lines while a bracket is open; a blank line, or a line that begins "
            "with a statement's keyword, ends it all the same.  The error stands at the opening bracket."
        ),
        example="Sq^2(iota_3 + Sq^1 iota_2",
    ),
    "unopened-bracket": Code(
        title="A bracket that closes nothing",
        explanation="There is one closing bracket too many, or the opening one is missing further left.",
        example="Sq^2 iota_3)",
    ),
    "bracket-mismatch": Code(
        title="A bracket closed by one of another kind",
        explanation="( is closed by ), [ by ] and { by }.  The error stands at the opening bracket.",
        example="Sq^2 (iota_3]",
    ),
    "too-deep": Code(
        title="Too many brackets inside one another",
        explanation="At most 250 brackets may be open at one place.  Name inner parts with `let`.",
        example="(" * 251 + "iota_2" + ")" * 251,
    ),
    "several-statements": Code(
        title="Several statements in one display",
        explanation=(
            "`\\begin{equation}`, `\\begin{align}` and the like fall away around one statement.  Their rows are one "
            "where each goes on with a sign of the one before it, as `= …`; else write one statement a line."
        ),
        example="\\begin{align} \\iota_3 &= 0 \\\\ \\iota_2 &= 0 \\end{align}",
    ),
    "long-statement": Code(
        title="A statement beyond the limit of length",
        explanation=(
            "A statement has at most 100,000 characters, unless the limit is raised.  Name its parts with `let`."
        ),
        example="iota_2" + " + iota_2" * 12_000,
    ),
    "unfinished": Code(
        title="A line that is to go on, and does not",
        explanation=(
            "A backslash at the end of a line joins the next line to it; here a blank line, a statement's keyword or "
            "the end of the script follows."
        ),
        example="Sq^2 iota_3 \\\n",
    ),
    "unknown-command": Code(
        title="A TeX command that is not known",
        explanation=(
            "TeX spelling takes the usual commands for operations, Greek letters, products, brackets, faces and "
            "spacing.  Macros of one's own are not expanded."
        ),
        example="\\frac{1}{2} \\iota_3",
    ),
    "ellipsis": Code(
        title="An ellipsis",
        explanation="What three dots stand for cannot be checked; write the terms out.",
        example="Sq^1 iota_2 + … + Sq^2 iota_2",
    ),
    "invalid-character": Code(
        title="A character that has no meaning",
        explanation=(
            "Formulas are made of Latin and Greek letters, digits, brackets and the signs of the language reference."
        ),
        example="Sq^2 iota_3 ? Sq^3 iota_2",
    ),
    "invalid-byte": Code(
        title="A byte that is no UTF-8",
        explanation="Scripts are text in UTF-8.  The byte stands at the place marked; the other statements are read.",
        example="$ printf 'Sq^2 iota_3 + \\377\\n' | opslang run -",
    ),
    "tex-script": Code(
        title="Only one digit is raised or lowered",
        explanation=(
            "In TeX, and so in TeX spelling here, `\\mathrm{Sq}^12` is Sq^1 followed by 2.  Where twelve is meant, "
            "write `^{12}`."
        ),
        example="\\mathrm{Sq}^12 \\iota_{13}",
    ),
}
