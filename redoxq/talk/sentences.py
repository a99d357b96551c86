"""Reads a sentence: from text to a statement, or an error that says where it went wrong."""

from __future__ import annotations

import re
import unicodedata

from lark.exceptions import UnexpectedEOF, UnexpectedInput, UnexpectedToken

from redoxq.errors import Place, SentenceError
from redoxq.talk.grammar import END, accepted_at, in_words, listed, sentence_grammar
from redoxq.talk.reader import remarks
from redoxq.talk.statement import About, Contact, Definition, Reaction, Statement

LONGEST_SENTENCE = 2000
"""Characters; no sentence about a liquor needs as many."""

ANSWERED = ('a contact ("zinc in 0.5 M CuSO4"), a fact sheet ("about Cu+2", "about 0.5 M CuSO4"), '
            'a reaction ("Cu+2 + 2 e- = Cu") or a definition ("let rinse = 5 g/L CuSO4")')

_NOT_YET = (
    (re.compile(r"\|"), "Cell diagrams"),
    (re.compile(r"^bridge\b"), "Salt bridges"),
    (re.compile(r"^measured\b"), "Readings"),
    (re.compile(r"^mix\b"), "Mixtures of two liquors"),
    (re.compile(r"^(which|choose)\b"), "Choices between metals"),
    (re.compile(r"^when\b"), "Turning points"),
    (re.compile(r"^map\b"), "Stability maps"),
    (re.compile(r"^(why\b|(at|under|without|with) |.* instead$)"), "Follow-ups"),
    (re.compile(r"\bjoined to\b"), "Joints of two metals"),
    (re.compile(r"\bexpect\b"), "Expectations"),
    (re.compile(r"^-?[\d.,]+ ?m?V\b"), "Conversions of potentials"),
    (re.compile(r"^([1-9]\d{2}[A-Z]{0,3}|1\.\d{4}|[A-Z]\d{5}) in\b"), "Alloys"),
    (re.compile(r"^(?!about |let )[^=]*\b(brass|bronze|steel|cast iron|solder)\b[^=]* in "), "Alloys"),
)
"""Kinds of sentences that are known but not answered, by what they cannot do without."""

_SAME_SIGN = str.maketrans({
    "\N{MINUS SIGN}": "-", "\N{EN DASH}": "-", "\N{NON-BREAKING HYPHEN}": "-",
    "\N{NO-BREAK SPACE}": " ", "\N{THIN SPACE}": " ", "\N{NARROW NO-BREAK SPACE}": " ", "\t": " ",
    "\N{MICRO SIGN}": "u", "\N{GREEK SMALL LETTER MU}": "u", "\N{MASCULINE ORDINAL INDICATOR}": "°",
})
"""One character for one, so that places in the sentence stay true."""

_OPENING = re.compile(
    r"\s*(About|Let|An?|The|Bridge|Measured|Mix|Which|When|Map|Why|At|Under|With|Without)\b(?= )"
)
_CLOSING = re.compile(r"\s*[.?!;]+\s*$")


def parse(text: str) -> Statement:
    """Read one sentence.

    Parameters
    ----------
    text : str

    Returns
    -------
    Statement
        Names are still as typed; `talk.resolve` looks them up.

    Raises
    ------
    SentenceError
        With the place where the text stops being a sentence and what was expected there.
    """
    plain = normalised(text)
    _refuse_kinds_not_answered(plain)
    try:
        said = sentence_grammar().parse(plain)
    except UnexpectedInput as error:
        raise _explained(plain, error) from None
    if not isinstance(said, Contact | About | Definition | Reaction):
        raise TypeError(f"The grammar gave {type(said).__name__} for a sentence.")
    return Statement(text, said, remarks(plain))


def normalised(text: str) -> str:
    """Return the text with one sign for each meaning, character for character.

    Raises
    ------
    SentenceError
        For text that is empty, too long, or holds characters that cannot be seen.
    """
    if len(text) > LONGEST_SENTENCE:
        message = f"The sentence has {len(text)} characters; the longest I read has {LONGEST_SENTENCE}."
        raise SentenceError(message, Place(LONGEST_SENTENCE, len(text)), "Say one thing at a time.")
    plain = _without_line_end(text).translate(_SAME_SIGN)
    for position, character in enumerate(plain):
        if unicodedata.category(character) in ("Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"):
            message = f"Character {position + 1} cannot be seen (U+{ord(character):04X})."
            raise SentenceError(message, Place(position, position + 1), "Type one sentence on one line.")
    plain = _CLOSING.sub(lambda match: " " * len(match[0]), plain)
    if not plain.strip():
        raise SentenceError("There is no sentence.", Place(0, len(text)), f"Type {ANSWERED}.")
    return _OPENING.sub(lambda match: match[0].lower(), plain, count=1) if _OPENING.match(plain) else plain


def _without_line_end(text: str) -> str:
    ended = text.rstrip("\r\n")
    return ended + " " * (len(text) - len(ended))


def _refuse_kinds_not_answered(text: str) -> None:
    said = text.strip()
    for pattern, kind in _NOT_YET:
        match = pattern.search(said)
        if match:
            start = text.index(said) + match.start()
            raise SentenceError(f"{kind} are not answered yet.", Place(start, start + len(match[0])),
                                f"Answered are {ANSWERED}.")


def _explained(text: str, error: UnexpectedInput) -> SentenceError:
    """Say where the sentence went wrong and what the parser would have accepted there."""
    words = in_words(accepted_at(error, text))
    expected = f"Expected {listed(words)}." if words else None
    if isinstance(error, UnexpectedEOF) or (isinstance(error, UnexpectedToken) and error.token.type == END):
        end = len(text.rstrip())
        return SentenceError("The sentence stops too early.", Place(end, end), expected)
    start = error.pos_in_stream or 0
    word = re.split(r"[\s,]", text[start:], maxsplit=1)[0] or text[start]
    return SentenceError(f'I cannot read on from "{word}".', Place(start, start + len(word)), expected)
