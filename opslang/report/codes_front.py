"""Diagnostic names of whole files, of output and of interrupted runs.  Knows no statement."""

from __future__ import annotations

from opslang.report.code import Code

FRONT_CODES: dict[str, Code] = {
    "missing-file": Code(
        title="There is no file of that name",
        explanation=(
            "A script named on the command line is not there, or was gone by the time its turn came.  The other "
            "scripts are run; the exit status is 2."
        ),
        example="$ opslang run no-such-script.ops",
    ),
    "unreadable-file": Code(
        title="The file cannot be read",
        explanation=(
            "The operating system refuses the file: the right to read it is missing, a link leads round in a "
            "circle, or the disk fails.  The message says which.  The other scripts are run; the exit status is "
            "2."
        ),
        example="$ ln -s round.ops round.ops; opslang run round.ops",
    ),
    "unwritable-file": Code(
        title="A mended draft cannot be written",
        explanation=(
            "`opslang lint --mend` writes the mended draft beside the old one and then puts it in its place; "
            "the folder or the file does not allow it.  The draft is left as it was."
        ),
        example="",
    ),
    "folder-for-file": Code(
        title="A folder stands where a script is wanted",
        explanation=(
            "A folder is not searched for scripts: name the scripts in it, as in `opslang run relations/*.ops`."
        ),
        example="$ mkdir relations; opslang run relations",
    ),
    "binary-file": Code(
        title="The file is not text",
        explanation=(
            "The file begins with bytes that no text in UTF-8 holds (a NUL byte, or the mark of UTF-16), so "
            "nothing in it is read.  Save the script as UTF-8.  A single bad byte inside a text is no such case: "
            "it is an error at its own place, and the rest of the script runs."
        ),
        example="$ printf 'Sq^1\\0' > picture.ops; opslang run picture.ops",
    ),
    "long-line": Code(
        title="A line is longer than any statement can be",
        explanation=(
            "A line of more than four million characters is left out, and the lines after it are run.  A "
            "statement may be spread over several lines: it goes on while a bracket is open or after a trailing "
            "operator."
        ),
        example="$ { head -c 4100000 /dev/zero | tr '\\0' +; echo; } > long.ops; opslang run long.ops",
    ),
    "output-failed": Code(
        title="The results cannot be written",
        explanation=(
            "Standard output is closed, or the device behind it is full or failing.  The run ends with exit "
            "status 2, since what it would go on to compute has nowhere to go.  A pipe whose reader has left is "
            "no such case: the run then ends quietly."
        ),
        example="$ opslang eval 'Sq^1 iota_2' > /dev/full",
    ),
    "interrupted": Code(
        title="The statement was interrupted",
        explanation=(
            "Ctrl-C came while this statement was being worked on, and it had been for half a second or more; it "
            "has no result, and the run goes on with the next one.  A second Ctrl-C within two seconds, or one "
            "that comes between statements, ends the run.  Either way the exit status is 130."
        ),
        example="$ timeout --signal INT 3 opslang eval --limit 1000000000000 'series K(Z/2, 3) to 200000'",
    ),
    "no-such-result": Code(
        title="The shell has no such result",
        explanation=(
            "In the shell `that` stands for an earlier result, by its number or the last one.  There is none of that "
            "number, or it was found at another prime."
        ),
        example="",
    ),
    "worker-lost": Code(
        title="A worker process ended before its time",
        explanation=(
            "With `--jobs`, statements are shared among worker processes.  One of them ended without an answer, "
            "most often because the machine ran out of memory.  The run ends with exit status 2; fewer jobs need "
            "less memory."
        ),
        example="",
    ),
    "internal-fault": Code(
        title="opslang itself failed on this statement",
        explanation=(
            "A fault of the program, not of the script.  The statement has no result and the run goes on.  Please"
            " report the statement together with the message."
        ),
        example="",
    ),
}
