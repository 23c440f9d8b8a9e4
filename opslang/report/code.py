"""What a diagnostic name stands for.  Knows no names: they stand in the tables beside this file."""

from __future__ import annotations

from attrs import frozen


@frozen
class Code:
    """A diagnostic name with the words that explain it.

    The example is a script in which the name appears; where no script can show it (a vanished file, a full
    disk), the example is a command line that begins with `$ `.
    """

    title: str
    explanation: str
    example: str
