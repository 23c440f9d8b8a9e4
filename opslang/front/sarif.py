"""Findings as SARIF 2.1.0 (OASIS standard, 2020), written as they come.  Knows the format and the register of rules.

The results are one long array, so a run over an archive holds one report at a time.
"""

from __future__ import annotations

import json
import os
from collections.abc import Iterator
from hashlib import sha256
from urllib.parse import quote

from opslang import __version__
from opslang.lint.result import Report, Row
from opslang.lint.rule import LintRule, register

SCHEMA = "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"
_KINDS = {"checked": "pass", "not-checked": "open"}


def uri(name: str) -> str:
    """A file's name as a URI: relative as it was given, or absolute."""
    text = quote(name.replace(os.sep, "/"), errors="surrogateescape")
    return f"file://{text}" if os.path.isabs(name) else text


def _rule(name: str, rule: LintRule) -> dict[str, object]:
    lines = [rule.why, "", "Said of:", *(f"    {line}" for line in rule.bad)]
    lines += ["Not said of:", *(f"    {line}" for line in rule.good)]
    return {
        "id": name,
        "shortDescription": {"text": rule.title},
        "fullDescription": {"text": rule.why},
        "help": {"text": "\n".join(lines)},
        "defaultConfiguration": {"level": rule.severity},
    }


class Sarif:
    """The text of one run: `head`, then `results` for each report, then `tail`."""

    def __init__(self) -> None:
        self._listed = [(name, rule) for rule in register() for name in (rule.name, *rule.also)]
        self._rules = {name: number for number, (name, _) in enumerate(self._listed)}
        self._first = True
        self._troubles: list[dict[str, object]] = []

    def head(self) -> str:
        """All that comes before the first result."""
        driver = {
            "name": "opslang",
            "semanticVersion": __version__,
            "rules": [_rule(name, rule) for name, rule in self._listed],
        }
        start = f'{{"$schema": {json.dumps(SCHEMA)}, "version": "2.1.0", "runs": [{{"tool": '
        return start + json.dumps({"driver": driver}) + ', "columnKind": "unicodeCodePoints", "results": ['

    def results(self, report: Report, rows: tuple[Row, ...]) -> Iterator[str]:
        """The rows of one report, as results."""
        if report.failure is not None:
            name, message = report.failure
            place = {"physicalLocation": {"artifactLocation": {"uri": uri(report.name)}}}
            trouble: dict[str, object] = {
                "level": "error",
                "message": {"text": f"{name}: {message}"},
                "locations": [place],
            }
            self._troubles.append(trouble)
        for row in rows:
            yield ("\n" if self._first else ",\n") + json.dumps(self._result(row), ensure_ascii=True)
            self._first = False

    def tail(self) -> str:
        """All that comes after the last result."""
        invocation = {"executionSuccessful": not self._troubles, "toolExecutionNotifications": self._troubles}
        return f'], "invocations": [{json.dumps(invocation)}]}}]}}\n'

    def _result(self, row: Row) -> dict[str, object]:
        region: dict[str, object] = {"startLine": row.line, "startColumn": row.column}
        region |= {"endLine": row.end_line, "endColumn": row.end_column}
        artifact = {"uri": uri(row.file)}
        physical = {"artifactLocation": artifact, "region": region | {"snippet": {"text": _whole(row.formula)}}}
        said = _whole("\n".join(part for part in (row.message, row.help) if part))
        result: dict[str, object] = {"ruleId": row.name}
        if row.name in self._rules:
            result["ruleIndex"] = self._rules[row.name]
        if row.name in _KINDS:
            result["kind"] = _KINDS[row.name]
        result["level"] = "none" if row.name in _KINDS else row.severity
        result["message"] = {"text": said}
        result["locations"] = [{"physicalLocation": physical}]
        result["partialFingerprints"] = {"formula/v1": _fingerprint(row)}
        if row.mend is not None:
            change = {"deletedRegion": region, "insertedContent": {"text": _whole(row.mend)}}
            fix = {"artifactChanges": [{"artifactLocation": artifact, "replacements": [change]}]}
            result["fixes"] = [fix]
        if row.steps:
            result["properties"] = {"derivation": list(row.steps)}
        return result


def _whole(text: str) -> str:
    """The text without lone surrogates, which no JSON reader must accept."""
    return text.encode("utf-8", "replace").decode()


def _fingerprint(row: Row) -> str:
    """What stays the same while the finding moves about in its file."""
    facts = "\0".join((row.file, row.name, " ".join(row.formula.split())))
    return sha256(facts.encode("utf-8", "replace")).hexdigest()[:32]
