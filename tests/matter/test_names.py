"""Names of substances, salts, ions and metals; formulas as names; what is near a mistyped name."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from redoxq.errors import FormulaError, UnknownNameError
from redoxq.matter import names
from redoxq.matter.catalogue import catalogue
from redoxq.matter.composition import components
from redoxq.matter.formula import parse_formula
from redoxq.matter.ions import ion_named, ions, plain_name
from redoxq.matter.names import known_names, metal, nearest, salt_text, substance
from redoxq.matter.tables import read_table

# Systematic names of IUPAC Nomenclature of Inorganic Chemistry (2005) and the older ones of the trade.
SPOKEN = {
    "CuSO4": [
        "copper sulfate", "copper sulphate", "Copper(II) Sulfate", "copper (II) sulfate", "copper II sulfate",
        "cupric sulfate", "Cu sulfate", "Cu(II) sulfate", "CuSO4", "CuSO₄",
    ],
    "CuSO4.5H2O": ["copper sulfate pentahydrate", "blue vitriol", "bluestone", "copper(II) sulfate 5-hydrate"],
    "FeSO4": ["iron sulfate", "ferrous sulphate", "iron(II) sulfate"],
    "FeSO4.7H2O": ["green vitriol", "copperas", "ferrous sulfate heptahydrate"],
    "Fe2(SO4)3": ["ferric sulfate", "iron(III) sulfate"],
    "FeCl3": ["ferric chloride", "iron trichloride", "iron(III) chloride"],
    "CuCl": ["cuprous chloride", "copper(I) chloride"],
    "SnCl2": ["stannous chloride", "tin chloride", "tin(II) chloride", "tin dichloride"],
    "SnCl4": ["stannic chloride", "tin(IV) chloride", "tin tetrachloride"],
    "Hg2(NO3)2": ["mercurous nitrate", "mercury(I) nitrate"],
    "HgCl2": ["mercuric chloride", "corrosive sublimate"],
    "HCl": ["hydrochloric acid", "muriatic acid", "hydrogen chloride"],
    "H2SO4": ["sulfuric acid", "sulphuric acid", "oil of vitriol", "hydrogen sulfate"],
    "NaOH": ["caustic soda", "lye", "sodium hydroxide"],
    "KOH": ["caustic potash", "potassium hydroxide"],
    "Na2CO3": ["soda ash", "sodium carbonate"],
    "NaHCO3": ["baking soda", "sodium bicarbonate", "sodium hydrogen carbonate", "sodium hydrogencarbonate"],
    "NH3": ["ammonia", "aqua ammonia", "ammonium hydroxide", "NH4OH"],
    "NH4Cl": ["sal ammoniac", "ammonium chloride"],
    "Na3PO4": ["trisodium phosphate", "sodium phosphate"],
    "Na2HPO4": ["disodium phosphate", "disodium hydrogen phosphate", "sodium hydrogen phosphate"],
    "NaH2PO4": ["monosodium phosphate", "sodium dihydrogen phosphate"],
    "NH4HF2": ["ammonium bifluoride", "ammonium hydrogen difluoride"],
    "Na2S2O3.5H2O": ["hypo", "sodium thiosulfate pentahydrate"],
    "KNO3": ["saltpetre", "potassium nitrate"],
    "AgNO3": ["lunar caustic", "silver nitrate", "silver(I) nitrate"],
    "ZnCl2": ["zinc chloride", "zinc(II) chloride"],
    "AlCl3": ["aluminium chloride", "aluminum chloride", "aluminium(III) chloride"],
    "NaCl": ["salt", "table salt", "sodium chloride", "NaCl"],
    "K4Fe(CN)6": ["potassium ferrocyanide", "potassium hexacyanoferrate(II)", "K4[Fe(CN)6]"],
    "KAl(SO4)2.12H2O": ["alum", "potash alum"],
    "MgSO4.7H2O": ["epsom salt", "magnesium sulfate heptahydrate"],
    "(CaSO4)2.H2O": ["calcium sulfate hemihydrate", "plaster of Paris"],
    "Na2Sn(OH)6": ["sodium stannate"],
    "Ni(NH2SO3)2": ["nickel sulfamate"],
    "PbO2": ["lead dioxide", "lead(IV) oxide"],
    "NaClO": ["sodium hypochlorite", "NaOCl", "bleach"],
    "NaCH3COO": ["sodium acetate", "CH3COONa", "NaC2H3O2", "CH3CO2Na"],
    "CH3COOH": ["acetic acid", "vinegar", "CH3CO2H"],
    "H2C2O4": ["oxalic acid", "(COOH)2"],
    "H2O2": ["hydrogen peroxide", "peroxide", "oxygenated water"],
    "HCN": ["prussic acid", "hydrogen cyanide"],
    "H2O": ["water", "distilled water", "pure water", "H2O"],
    "H2S": ["hydrogen sulfide", "hydrogen sulphide"],
    "NaClO4": ["NaClO4", "sodium perchlorate"],
    "Ni(NO3)2": ["Ni(NO3)2", "nickel nitrate"],
    "Cu+2": ["Cu+2", "Cu2+", "copper(II) ion", "cupric ion", "copper ion", "copper(II)", "Cu(II)"],
    "SO4-2": ["sulfate ion", "sulphate", "SO42-"],
    "NH4+": ["ammonium", "ammonium ion"],
    "H+": ["hydrogen ion", "hydronium", "H3O+"],
    "SCN-": ["thiocyanate", "NCS-"],
    "Zn": ["zinc", "ZINC", "Zn"],
    "Al": ["aluminium", "aluminum"],
}  # fmt: skip


@pytest.mark.parametrize(("formula", "spoken"), [(text, one) for text, ways in SPOKEN.items() for one in ways])
def test_names(formula: str, spoken: str) -> None:
    assert substance(spoken).formula.text == formula


@pytest.mark.parametrize(
    ("spoken", "kind"),
    [
        ("copper sulfate", "salt"),
        ("HCOONa", "salt"),
        ("nitric acid", "acid"),
        ("HClO4", "acid"),
        ("HAuCl4", "acid"),
        ("caustic soda", "base"),
        ("Ba(OH)2", "base"),
        ("H2S", "gas"),
        ("chlorine", "gas"),
        ("argon", "gas"),
        ("Kr", "gas"),
        ("hydrogen peroxide", "solute"),
        ("graphite", "solid"),
        ("zinc", "metal"),
        ("Hg", "metal"),
        ("Cu+2", "ion"),
        ("water", "water"),
        ("H2O", "water"),
    ],
)
def test_kinds(spoken: str, kind: str) -> None:
    assert substance(spoken).kind == kind


# Strengths as sold; common practice.
@pytest.mark.parametrize(
    ("spoken", "share"),
    [
        ("concentrated nitric acid", 68),
        ("conc. nitric acid", 68),
        ("conc sulfuric acid", 96),
        ("concentrated hydrochloric acid", 37),
        ("concentrated ammonia", 28),
        ("nitric acid", None),
        ("copper sulfate", None),
    ],
)
def test_strength_of_what_is_sold_as_a_solution(spoken: str, share: float | None) -> None:
    assert substance(spoken).strength == share


@pytest.mark.parametrize(
    ("spoken", "near"),
    [
        ("coper sulfate", "copper sulfate"),
        ("copper sulfat", "copper sulfate"),
        ("zinc chlorid", "zinc chloride"),
        ("cuso4", "CuSO4"),
        ("nacl", "NaCl"),
        ("NACL", "NaCl"),
        ("CuSo4", "CuSO4"),
        ("nitric", "nitric acid"),
        ("sulfric acid", "sulfuric acid"),
        ("SO4", "SO4-2"),
        ("N", "N2"),
        ("Cu2", "Cu"),
        ("zn", "Zn"),
    ],
)
def test_a_mistyped_name_is_told_with_the_nearest(spoken: str, near: str) -> None:
    with pytest.raises(UnknownNameError) as raised:
        substance(spoken)
    assert (raised.value.hint or "").startswith(f"Nearest: {near}")


@pytest.mark.parametrize("spoken", ["unobtainium", "xyz", "q", "rainbow liquor"])
def test_nothing_is_near_what_is_far_from_all(spoken: str) -> None:
    assert nearest(spoken) == []
    with pytest.raises(UnknownNameError, match="no substance"):
        substance(spoken)


@pytest.mark.parametrize(
    "spoken", ["zinc(III) chloride", "copper(V) sulfate", "sodium dioxide", "disodium sulfide ion salt"]
)
def test_no_salt_is_made_up(spoken: str) -> None:
    with pytest.raises(UnknownNameError):
        substance(spoken)


def test_states_that_make_no_sense_are_refused() -> None:
    with pytest.raises(UnknownNameError, match="oxidation states"):
        substance("NaC9")


def test_metals_by_name_and_symbol() -> None:
    spoken = ["zinc", "Zn", "Aluminum", "quicksilver", "IRON", "tin"]
    assert [metal(text) for text in spoken] == ["Zn", "Zn", "Al", "Hg", "Fe", "Sn"]
    with pytest.raises(UnknownNameError) as raised:
        metal("zink")
    assert "zinc" in (raised.value.hint or "")
    with pytest.raises(UnknownNameError):
        metal("sulfur")


def test_every_metal_is_known_by_its_name() -> None:
    assert {metal(name) for name in known_names("metal")} == set(catalogue().metals)


def test_every_row_of_names_is_found_and_made_of_known_states() -> None:
    for row in read_table("names.csv"):
        found = substance(row["name"])
        assert found.formula == parse_formula(row["formula"]), row["name"]
        assert found.kind == row["kind"], row["name"]


def test_every_salt_of_known_ions_is_found_by_name_and_by_formula() -> None:
    for cation in (ion for ion in ions() if ion.formula.charge > 0 and ion.text != "H+"):
        for anion in (ion for ion in ions() if ion.formula.charge < 0):
            formula = parse_formula(salt_text(cation.formula, anion.formula))
            assert formula.charge == 0
            named = substance(f"{cation.names[0]} {anion.names[0]}")
            everyday = plain_name(f"{cation.names[0]} {anion.names[0]}") in names._everyday()
            assert everyday or named.formula == formula, named


def test_names_of_ions_are_told_apart() -> None:
    spoken = [plain_name(name) for ion in ions() for name in ion.names]
    assert sorted({name for name in spoken if spoken.count(name) > 1}) == []
    assert all(ion_named(plain_name(name)) is ion for ion in ions() for name in ion.names)
    assert all(components(ion.formula) is not None for ion in ions())


def test_ions_stand_in_the_tables_as_species_do() -> None:
    assert [ion.text for ion in ions() if ion.formula.text != ion.text] == []


@given(st.text(max_size=140))
def test_any_text_is_a_substance_or_a_plain_error(text: str) -> None:
    try:
        found = substance(text)
    except (UnknownNameError, FormulaError) as error:
        refused = error
    else:
        assert found.kind
        return
    assert refused.message
    assert refused.at is None or refused.at.end <= max(len(text), 1)
