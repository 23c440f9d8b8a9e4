"""Which family a named space is.  Imported when the first named space is met."""

from __future__ import annotations

from opslang.spaces import characteristic, projective, spin
from opslang.spaces.family import Family
from opslang.spaces.space import NamedFactor
from opslang.spaces.thom import thom

_PROJECTIVE = {"RP": projective.real, "CP": projective.complex_, "HP": projective.quaternionic}
_CLASSIFYING = {
    "BO": characteristic.orthogonal,
    "BSO": characteristic.orthogonal,
    "BSpin": characteristic.orthogonal,
    "BU": characteristic.unitary,
    "BSU": characteristic.unitary,
    "BSp": characteristic.symplectic,
}


def family(named: NamedFactor, prime: int, factor: int) -> Family:
    """What a named space says of itself at a prime.  NotKnown where it is outside what is known."""
    if named.base is not None:
        return thom(named.base.family(prime, factor), prime, factor)
    if named.word == "lens":
        x, y = (*named.letters, *("x", "y")[len(named.letters) :])
        return projective.Lens(named.number or 0, (x, y), factor)
    if named.word in _PROJECTIVE:
        return _PROJECTIVE[named.word](named.number, named.letters[0] if named.letters else None, factor)
    group = named.word[1:]
    if named.word == "BSpin" and prime == 2:
        return spin.spin(group, named.number, prime, factor)
    return _CLASSIFYING[named.word](group, named.number, prime, factor)
