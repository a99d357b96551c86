"""One door to all jobs: a question in, its answer out."""

from __future__ import annotations

from redoxq.jobs.answers import Answer
from redoxq.jobs.questions import (
    ContactQuestion,
    Definition,
    LiquorQuestion,
    Question,
    ReactionQuestion,
    SpeciesQuestion,
)


def answer(question: Question) -> Answer:
    """Answer a question of any kind.

    Raises
    ------
    RedoxqError
        When it cannot be answered.
    """
    # Each job is imported when it is asked for: a reaction needs no rules, a definition no physics.
    if isinstance(question, ContactQuestion):
        from redoxq.jobs.contact import contact

        return contact(question)
    if isinstance(question, ReactionQuestion):
        from redoxq.jobs.reaction import reaction

        return reaction(question)
    if isinstance(question, SpeciesQuestion):
        from redoxq.jobs.about import about_species

        return about_species(question)
    if isinstance(question, LiquorQuestion):
        from redoxq.jobs.about import about_liquor

        return about_liquor(question)
    return _definition(question)


def _definition(question: Definition) -> Answer:
    return Answer(
        statement=question.canonical,
        kind="definition",
        summary=f"{question.name} now stands for this liquor.",
        temperature_K=question.recipe.temperature,
        assumptions=question.assumptions,
    )
