"""Every diagnostic name: its title, its explanation and an example that shows it.  Retired names stay.

The names stand in one table a room, beside this file; here they are only put together.
"""

from __future__ import annotations

from opslang.report.code import Code
from opslang.report.codes_front import FRONT_CODES
from opslang.report.codes_meaning import MEANING_CODES
from opslang.report.codes_presentation import PRESENTATION_CODES
from opslang.report.codes_syntax import SYNTAX_CODES

CODES: dict[str, Code] = {**MEANING_CODES, **PRESENTATION_CODES, **SYNTAX_CODES, **FRONT_CODES}

__all__ = ["CODES", "Code"]
