"""Names near a mistyped one."""

from __future__ import annotations

from collections.abc import Iterable
from difflib import SequenceMatcher


def nearest_of(text: str, names: Iterable[str], n: int, least: float) -> list[str]:
    """Up to `n` names, the nearest first.

    Parameters
    ----------
    text : str
    names : iterable of str
    n : int
    least : float
        Likeness from 0 to 1 below which a name is not near.

    Returns
    -------
    list of str
    """
    matcher = SequenceMatcher(autojunk=False)
    matcher.set_seq2(text)
    found = []
    for name in dict.fromkeys(names):
        matcher.set_seq1(name)
        if matcher.real_quick_ratio() >= least and matcher.quick_ratio() >= least:
            likeness = matcher.ratio()
            if likeness >= least:
                found.append((-likeness, name))
    return [name for _, name in sorted(found)[:n]]
