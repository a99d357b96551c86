"""From a sentence to an answer, for programs: `ask` and the typed functions."""

from __future__ import annotations

from collections.abc import Sequence

from redoxq.jobs.answering import answer
from redoxq.jobs.answers import Answer, ContactAnswer
from redoxq.jobs.questions import ContactQuestion
from redoxq.talk.session import Session


def ask(sentence: str, session: Session | None = None) -> Answer:
    """Answer one sentence.

    Parameters
    ----------
    sentence : str
        Such as `zinc in 0.5 M copper sulfate`.
    session : Session, optional
        Keeps the liquors that `let` gives a name, from one sentence to the next.

    Returns
    -------
    Answer
        Of the kind that was asked for; `.to_dict()` gives the keys of the JSON contract.

    Raises
    ------
    RedoxqError
        When the sentence cannot be read or answered; it carries a place and a hint.

    Examples
    --------
    >>> ask("zinc in 0.5 M copper sulfate").verdict
    'attacked'
    """
    return answer((session or Session()).hear(sentence))


def contact(
    metal: str,
    liquor: str | Sequence[str],
    temperature_C: float = 25.0,
    pH: float | None = None,
    air: str = "open",
    metal_mass_g: float | None = None,
    volume_L: float = 1.0,
) -> ContactAnswer:
    """Answer what happens when a metal meets a liquor.

    Parameters
    ----------
    metal : str
        Name or symbol.
    liquor : str or sequence of str
        Ingredients as they are said, `0.5 M CuSO4`; several in a sequence or joined by ` + `.
    temperature_C : float
        °C.
    pH : float, optional
        Of the liquor at the start, where it is given; else it is computed.
    air : str
        open, none, nitrogen, oxygen or hydrogen.
    metal_mass_g : float, optional
        g; in excess unless given.
    volume_L : float
        L of liquor.

    Returns
    -------
    ContactAnswer

    Raises
    ------
    RedoxqError
    """
    joined = liquor if isinstance(liquor, str) else " + ".join(liquor)
    weight = "" if metal_mass_g is None else f", {metal_mass_g:.12g} g,"
    volume = "" if volume_L == 1.0 else f"{volume_L:.12g} L of "
    held = "" if pH is None else f", pH {pH:.12g}"
    gas = {"open": "open to air", "none": "without air"}.get(air, f"under {air}")
    question = Session().hear(f"{metal}{weight} in {volume}{joined} at {temperature_C:.12g} C{held}, {gas}")
    if not isinstance(question, ContactQuestion):
        raise TypeError("a contact needs a metal and a liquor")
    found = answer(question)
    assert isinstance(found, ContactAnswer)
    return found
