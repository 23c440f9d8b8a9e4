"""Degree, excess and admissibility of words.  Knows words as plain tuples of tokens.

A token i > 0 at p = 2 is Sq^i.  At odd p the token 0 is the Bockstein and s > 0 is P^s.
At every prime a last token -k (k >= 2) stands for beta_k, which counts as a Bockstein in degree and excess.
"""

from __future__ import annotations

Word = tuple[int, ...]


def token_degree(token: int, p: int) -> int:
    """|Sq^i| = i, |P^s| = 2s(p-1), |beta| = |beta_k| = 1."""
    if token < 0:
        return 1
    if p == 2:
        return token
    return 2 * token * (p - 1) if token else 1


def degree(word: Word, p: int) -> int:
    """The degree by which the word raises cohomological degree."""
    if p == 2:
        return sum(token if token > 0 else 1 for token in word)
    return sum(2 * token * (p - 1) if token > 0 else 1 for token in word)


def excess(word: Word, p: int) -> int:
    """The excess of an admissible word; 0 for the empty word.

    p = 2: e(I) = 2 i_1 - |I|; p odd: e(I) = 2p s_1 + 2 eps_0 - |I|, where s_1 is the leftmost power and
    eps_0 = 1 when the word begins with a Bockstein.  Source: Serre 1953; Cartan 1954 (convention of the language
    reference).
    """
    if not word:
        return 0
    if p == 2:
        return 2 * max(word[0], 1) - degree(word, p)
    begins = 1 if word[0] <= 0 else 0
    power = word[begins] if len(word) > begins and word[begins] > 0 else 0
    return 2 * p * power + 2 * begins - degree(word, p)


def is_admissible(word: Word, p: int) -> bool:
    """Whether the word is admissible: i_j >= 2 i_{j+1} (p = 2); s_j >= p s_{j+1} + eps_j and no two Bocksteins side
    by side (p odd)."""
    if p == 2:
        values = [token if token > 0 else 1 for token in word]
        return all(a >= 2 * b for a, b in zip(values, values[1:]))
    previous: int | None = None
    bockstein = 0
    for token in word:
        if token <= 0:
            if bockstein:
                return False
            bockstein = 1
        else:
            if previous is not None and previous < p * token + bockstein:
                return False
            previous, bockstein = token, 0
    if previous is not None and bockstein:
        return previous >= bockstein
    return True
