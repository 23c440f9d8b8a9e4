"""The one factor that is put together only in lowering: `w_2(E)`, a name and the bundle in brackets behind it."""

from __future__ import annotations

from attrs import frozen

from opslang.ground.source import Span
from opslang.syntax import surface as sf


@frozen
class Characteristic:
    """A characteristic class of a bundle."""

    name: sf.Name
    body: sf.Sum
    span: Span
