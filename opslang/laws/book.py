"""The book of laws, in order of trial.  The order may change an explanation, never an answer.

To add a law: write its value in a file of this folder and name it here once.
"""

from __future__ import annotations

from collections.abc import Mapping

from opslang.laws.bockstein import BELOW_ORDER, HIGHER_LEIBNIZ, INTEGRAL, ODD_CLASS_SQUARED, OF_BOCKSTEIN, OF_POWER
from opslang.laws.cartan import BETA_POWER, CARTAN, FROBENIUS, LEIBNIZ
from opslang.laws.composition import ADEM, ADEM_BOCKSTEIN, ADEM_POWERS, BETA_SQUARED
from opslang.laws.conjugation import CHI_LETTER, CHI_PRIMITIVE, CHI_STRAFFIN, CHI_TWICE, CHI_WORD
from opslang.laws.given import HIGHER, OPERATION, RELATION, TRUNCATED
from opslang.laws.instability import EXCESS, EXTERIOR, ODD_SQUARE, ON_UNIT, TOP_POWER, VANISH
from opslang.laws.law import Law
from opslang.laws.milnor import Q_COMMUTATOR, Q_DEGREE_ONE, Q_PRODUCT, Q_SQUARED, Q_ZERO
from opslang.laws.projective import BINOMIAL, EMPTY
from opslang.laws.splitting import SPLITTING
from opslang.laws.total import TOTAL
from opslang.laws.wu import THOM, WU

BOOK: tuple[Law, ...] = (
    VANISH,
    EXCESS,
    INTEGRAL,
    ON_UNIT,
    BETA_SQUARED,
    BELOW_ORDER,
    OF_BOCKSTEIN,
    ODD_CLASS_SQUARED,
    EXTERIOR,
    ODD_SQUARE,
    TRUNCATED,
    EMPTY,
    RELATION,
    Q_SQUARED,
    BETA_POWER,
    TOP_POWER,
    BINOMIAL,
    WU,
    THOM,
    SPLITTING,
    OPERATION,
    HIGHER,
    FROBENIUS,
    CARTAN,
    LEIBNIZ,
    HIGHER_LEIBNIZ,
    OF_POWER,
    Q_ZERO,
    Q_DEGREE_ONE,
    Q_PRODUCT,
    Q_COMMUTATOR,
    CHI_TWICE,
    CHI_PRIMITIVE,
    CHI_WORD,
    CHI_STRAFFIN,
    CHI_LETTER,
    TOTAL,
    ADEM,
    ADEM_POWERS,
    ADEM_BOCKSTEIN,
)

LAWS: Mapping[str, Law] = {law.name: law for law in BOOK}
"""The laws by name."""
