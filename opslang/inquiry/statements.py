"""Which inquiry answers which statement."""

from __future__ import annotations

from opslang.ir.outcome import Outcome
from opslang.meaning.lower import Lowering
from opslang.syntax import surface as sf
from opslang.tables.engine import Engine


def answer(statement: sf.Statement, blank: Outcome, lowering: Lowering, engine: Engine) -> Outcome:
    """The outcome of a statement about maps, bundles or the comparison of spaces."""
    engine.start()
    if isinstance(statement, sf.MapStatement):
        from opslang.inquiry.maps import declared

        return declared(statement, blank, lowering, engine)
    if isinstance(statement, sf.ComposeStatement):
        from opslang.inquiry.maps import composed

        return composed(statement, blank, lowering)
    if isinstance(statement, sf.BundleStatement):
        from opslang.inquiry.bundles import declared as bundle

        return bundle(statement, blank, lowering, engine)
    if isinstance(statement, sf.BundleSumStatement):
        from opslang.inquiry.bundles import named

        return named(statement, blank, lowering)
    if isinstance(statement, sf.CompareStatement):
        from opslang.inquiry.compare import compared

        return compared(statement, blank, lowering, engine)
    return blank
