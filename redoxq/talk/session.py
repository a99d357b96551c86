"""A conversation: remembers the liquors that were given a name."""

from __future__ import annotations

from redoxq.jobs.questions import Definition, Question
from redoxq.talk.resolve import resolve
from redoxq.talk.sentences import parse


class Session:
    """Reads sentences one after another.

    Attributes
    ----------
    definitions : dict of str to Definition
        By name, without regard to capitals.
    """

    def __init__(self) -> None:
        self.definitions: dict[str, Definition] = {}

    def hear(self, sentence: str) -> Question:
        """Read a sentence and look its names up; a definition is remembered.

        Raises
        ------
        RedoxqError
            When the sentence cannot be used; nothing is remembered then.
        """
        question = resolve(parse(sentence), self.definitions)
        if isinstance(question, Definition):
            self.definitions[question.name.casefold()] = question
        return question
