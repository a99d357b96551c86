"""Looks up the names of a statement and turns it into a question."""

from __future__ import annotations

from collections.abc import Mapping
from contextlib import suppress

from redoxq.errors import RedoxqError, SentenceError
from redoxq.jobs.questions import (
    ContactQuestion,
    Definition,
    LiquorQuestion,
    Question,
    ReactionQuestion,
    ReactionTerm,
    SpeciesQuestion,
)
from redoxq.matter import names
from redoxq.matter.catalogue import catalogue
from redoxq.matter.elements import elements
from redoxq.matter.formula import Formula, parse_formula
from redoxq.talk.brew import brewed, temperature_of
from redoxq.talk.canonical import (
    contact_sentence,
    liquor_words,
    reaction_words,
    substance_words,
    temperature_words,
)
from redoxq.talk.hearing import formula_heard, metal_heard, substance_heard
from redoxq.talk.statement import About, Contact, Liquor, Phrase, Quantity, Reaction, Statement, Term
from redoxq.talk.statement import Definition as DefinitionSaid
from redoxq.units import grams

Definitions = Mapping[str, Definition]


def resolve(statement: Statement, definitions: Definitions | None = None) -> Question:
    """Turn a statement into a question.

    Parameters
    ----------
    statement : Statement
    definitions : mapping of str to Definition, optional
        Liquors that were given a name, by that name without capitals.

    Returns
    -------
    Question

    Raises
    ------
    RedoxqError
        Placed in the sentence: an unknown name, an impossible strength, a substance where a metal is needed.
    """
    known = definitions or {}
    said = statement.said
    if isinstance(said, Contact):
        return _contact(said, known, statement.remarks)
    if isinstance(said, About):
        return _about(said, known, statement.remarks)
    if isinstance(said, DefinitionSaid):
        return _definition(said, known, statement.remarks)
    return _reaction(said, statement.remarks)


def _contact(said: Contact, known: Definitions, remarks: tuple[str, ...]) -> ContactQuestion:
    metal, powder = metal_heard(said.metal)
    mass = None if said.mass is None else _mass(said.mass)
    brew = brewed(said.liquor, known)
    return ContactQuestion(
        metal=metal,
        recipe=brew.recipe,
        metal_mass_g=mass,
        powder=powder,
        canonical=contact_sentence(_element_name(metal), mass, powder, brew.recipe),
        assumptions=remarks + brew.all_assumptions,
    )


def _mass(mass: Quantity) -> float:
    value = grams(mass.value, mass.unit)
    if value <= 0:
        raise SentenceError("The mass of the metal must be above zero.", mass.at)
    return value


def _about(said: About, known: Definitions, remarks: tuple[str, ...]) -> SpeciesQuestion | LiquorQuestion:
    subject = _single_name(said.liquor)
    if subject is not None and not _is_liquor(subject.text, known):
        return _species(subject, said.liquor.temperature, remarks)
    brew = brewed(said.liquor, known)
    return LiquorQuestion(recipe=brew.recipe, canonical=f"about {liquor_words(brew.recipe)}",
                          assumptions=remarks + brew.all_assumptions)


def _is_liquor(name: str, known: Definitions) -> bool:
    """Whether a name alone says how strong it is: a defined liquor, or battery acid."""
    if name.casefold() in known:
        return True
    with suppress(RedoxqError):
        return names.substance(name).strength is not None
    return False


def _single_name(liquor: Liquor) -> Phrase | None:
    """The name of a fact sheet's subject: one name without a strength, and nothing kept but a temperature."""
    portion, *more = liquor.portions
    plain = portion.strength is None and not more
    kept = (liquor.volume, liquor.pH, liquor.air)
    return portion.name if plain and all(item is None for item in kept) else None


def _species(subject: Phrase, temperature: Quantity | None, remarks: tuple[str, ...]) -> SpeciesQuestion:
    kelvins = temperature_of(temperature)
    formula, name, kind = _subject(subject)
    return SpeciesQuestion(
        formula=formula, name=name, kind=kind, temperature=kelvins,
        canonical=f"about {substance_words(formula)} at {temperature_words(kelvins)}",
        assumptions=remarks if temperature else (*remarks, "25 °C, since no temperature is given"),
    )


def _subject(subject: Phrase) -> tuple[Formula, str, str]:
    """Formula, name and kind of what a fact sheet is about.

    An ion, or a formula with its phase, is a species of the tables; a bare `CuSO4` is the salt.
    """
    with suppress(RedoxqError):
        symbol = names.metal(subject.text)
        return parse_formula(symbol), _element_name(symbol), "metal"
    with suppress(RedoxqError):
        formula = parse_formula(subject.text)
        if formula.charge or formula.phase:
            species = catalogue().get(substance_words(formula))
            return formula, species.name, "ion" if formula.charge else "species"
    substance = substance_heard(subject)
    return substance.formula, substance.name, substance.kind


def _definition(said: DefinitionSaid, known: Definitions, remarks: tuple[str, ...]) -> Definition:
    name = said.name.text
    if _is_known(name):
        message = f'"{name}" means something already.'
        raise SentenceError(message, said.name.at, "Give the liquor another name.")
    brew = brewed(said.liquor, known)
    return Definition(
        name=name, recipe=brew.recipe, stated=brew.stated,
        canonical=f"let {name} = {liquor_words(brew.recipe, brew.stated)}",
        assumptions=remarks + brew.assumptions,
    )


def _is_known(name: str) -> bool:
    for look_up in (names.metal, names.substance):
        try:
            look_up(name)
        except RedoxqError:
            continue
        return True
    return False


def _reaction(said: Reaction, remarks: tuple[str, ...]) -> ReactionQuestion:
    left, right = _side(said.left), _side(said.right)
    kelvins = temperature_of(said.temperature)
    return ReactionQuestion(
        left=left, right=right, temperature=kelvins,
        canonical=f"{reaction_words(left, right)} at {temperature_words(kelvins)}",
        assumptions=remarks if said.temperature else (*remarks, "25 °C, since no temperature is given"),
    )


def _side(terms: tuple[Term, ...]) -> tuple[ReactionTerm, ...]:
    return tuple(ReactionTerm(term.coefficient, formula_heard(term.name)) for term in terms)


def _element_name(symbol: str) -> str:
    return elements()[symbol].name.lower()
