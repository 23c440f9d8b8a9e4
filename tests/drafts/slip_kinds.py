"""The register of all kinds of slips, in the order in which `slips.plant` goes round."""

from __future__ import annotations

from collections.abc import Callable, Iterator

from drafts import slip_degrees as degrees
from drafts import slip_statements as statements
from drafts.corpus import Mark
from drafts.slip_degrees import Change

__all__ = ["KINDS", "Change"]

KINDS: dict[str, Callable[[Mark], Iterator[Change]]] = {
    "index by one": degrees.index_by_one,
    "class by one": degrees.class_by_one,
    "power by one": degrees.power_by_one,
    "index in a vanishing word": statements.index_in_vanishing,
    "indices swapped": statements.swapped_indices,
    "term dropped": statements.dropped_term,
    "binomial, upper entry": statements.binomial_upper,
    "binomial, lower entry": statements.binomial_lower,
    "wrong upper limit": statements.wrong_limit,
    "wrong lower limit": statements.wrong_start,
    "wrong total of indices": degrees.wrong_total,
    "range dropped": statements.dropped_range,
    "range turned": statements.turned_range,
    "instability weakened": degrees.weak_instability,
    "degree of the target": degrees.signature_degree,
    "degree claimed": degrees.claimed_degree,
    "excess of a word": statements.wrong_excess,
    "basis condition": statements.wrong_basis,
    "comma dropped": statements.dropped_comma,
    "generator dropped": statements.dropped_generator,
    "member inadmissible": statements.inadmissible_member,
    "sign at odd primes": statements.wrong_sign,
    "variable unbound": statements.loose_variable,
    "braces dropped": statements.lost_braces,
    "vanishing at the degree": degrees.vanishing_at_the_degree,
    "binomial turned": statements.turned_binomial,
    "summand dropped": statements.dropped_summand,
}
