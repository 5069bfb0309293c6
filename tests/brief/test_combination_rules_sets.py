"""What the rules make of load cases: names, durations, alternatives, options and mistakes."""

import pytest

from sizing.brief.combination_rules import RULES, expand, read_rule, usual_long_term
from sizing.brief.combination_rules_durations import EN_DURATIONS, US_DURATIONS, usual_durations
from sizing.brief.findings import Findings
from sizing.brief.model import LoadCase
from sizing.errors import InputError


def case(name, kind, **keys):
    return LoadCase(name=name, kind=kind, nodal={}, **keys)


ROOF = [
    case("self-weight", "permanent", self_weight=True),
    case("roofing", "permanent"),
    case("snow-full", "snow"),
    case("snow-left", "snow"),
    case("snow-right", "snow"),
    *(case(f"wind-{side}", "wind") for side in "nesw"),
]
SMALL = [case("G", "permanent"), case("S", "snow"), case("W", "wind")]


def strength(combinations):
    return [c for c in combinations if c.state == "strength"]


@pytest.mark.parametrize("rule", RULES)
def test_a_roof_gets_tens_of_combinations_each_once(rule):
    """Two permanent, three snow and four wind cases make less than a hundred combinations."""
    combinations = expand(rule, ROOF, {})
    assert 30 <= len(combinations) <= 100
    contents = {(c.state, c.duration, tuple(c.factors.items())) for c in combinations}
    assert len(contents) == len(combinations)
    assert len({c.name for c in combinations}) == len(combinations)
    assert all(c.origin.startswith(rule + " ") for c in combinations)
    assert all(f != 0.0 for c in combinations for f in c.factors.values())


@pytest.mark.parametrize("rule", RULES)
def test_all_permanent_cases_act_together(rule):
    """Self-weight and roofing have one factor in every combination (single source)."""
    for combination in expand(rule, ROOF, {}):
        assert combination.factors[0] == combination.factors[1]


def test_the_whole_set_of_one_snow_and_one_wind_case():
    """Names, origins, durations and factors, in a fixed order."""
    got = [(c.name, c.duration, c.origin, dict(c.factors)) for c in expand("EN 1990", SMALL, {})]
    assert got == [
        ("U1", "permanent", "EN 1990 6.10, permanent alone", {0: 1.35}),
        ("U2", "short", "EN 1990 6.10, S leading with W", {0: 1.35, 1: 1.5, 2: 0.9}),
        (
            "U3",
            "short",
            "EN 1990 6.10, S leading with W, permanent favourable",
            {0: 1.0, 1: 1.5, 2: 0.9},
        ),
        ("U4", "medium", "EN 1990 6.10, S leading", {0: 1.35, 1: 1.5}),
        ("U5", "medium", "EN 1990 6.10, S leading, permanent favourable", {0: 1.0, 1: 1.5}),
        ("U6", "short", "EN 1990 6.10, W leading with S", {0: 1.35, 1: 0.75, 2: 1.5}),
        (
            "U7",
            "short",
            "EN 1990 6.10, W leading with S, permanent favourable",
            {0: 1.0, 1: 0.75, 2: 1.5},
        ),
        ("U8", "short", "EN 1990 6.10, W leading", {0: 1.35, 2: 1.5}),
        ("U9", "short", "EN 1990 6.10, W leading, permanent favourable", {0: 1.0, 2: 1.5}),
        ("S1", "permanent", "EN 1990 characteristic 6.14b, permanent alone", {0: 1.0}),
        ("S2", "short", "EN 1990 characteristic 6.14b, S leading with W", {0: 1, 1: 1, 2: 0.6}),
        ("S3", "medium", "EN 1990 characteristic 6.14b, S leading", {0: 1.0, 1: 1.0}),
        ("S4", "short", "EN 1990 characteristic 6.14b, W leading with S", {0: 1, 1: 0.5, 2: 1}),
        ("S5", "short", "EN 1990 characteristic 6.14b, W leading", {0: 1.0, 2: 1.0}),
    ]


def test_asce7_set_of_one_snow_and_one_wind_case():
    """Names, origins, durations and factors of ASD, in the order of the clauses."""
    got = [
        (c.name, c.duration, c.origin, dict(c.factors))
        for c in strength(expand("ASCE 7-16 ASD", SMALL, {}, ["NDS"]))
    ]
    assert got == [
        ("U1", "permanent", "ASCE 7-16 ASD 2.4.1(1), 1D", {0: 1.0}),
        ("U2", "medium", "ASCE 7-16 ASD 2.4.1(3), 1D + 1S: S", {0: 1.0, 1: 1.0}),
        ("U3", "medium", "ASCE 7-16 ASD 2.4.1(4), 1D + 0.75S: S", {0: 1.0, 1: 0.75}),
        ("U4", "instantaneous", "ASCE 7-16 ASD 2.4.1(5), 1D + 0.6W: W", {0: 1.0, 2: 0.6}),
        (
            "U5",
            "instantaneous",
            "ASCE 7-16 ASD 2.4.1(6), 1D + 0.45W + 0.75S: W + S",
            {0: 1.0, 1: 0.75, 2: 0.45},
        ),
        ("U6", "instantaneous", "ASCE 7-16 ASD 2.4.1(7), 0.6D + 0.6W: W", {0: 0.6, 2: 0.6}),
    ]


def test_lrfd_load_duration_is_that_of_the_leading_load():
    """1.2D + 1.6S + 0.5W counts as snow for NDS Table N3 (time effect 0.8), not as wind."""
    for combination in strength(expand("ASCE 7-16 LRFD", SMALL, {}, ["NDS"])):
        leading = {1.6: "medium", 1.0: "instantaneous"}
        variable = [f for q, f in combination.factors.items() if q]
        expected = leading[max(variable)] if variable else "permanent"
        assert combination.duration == expected


def test_final_deflection_has_its_long_term_part():
    """Permanent actions count in full, variable ones with ψ2, whatever their factor."""
    cases = [case("G", "permanent"), case("Q", "imposed"), case("S", "snow")]
    settings = {"psi": {"snow": "snow Nordic"}}
    found = [c for c in expand("EN 1990", cases, settings) if c.state == "serviceability"]
    full = next(c for c in found if c.origin.endswith("S leading with Q"))
    assert full.factors == {0: 1.0, 1: 0.7, 2: 1.0}
    assert full.long_term == {0: 1.0, 1: 0.3, 2: 0.2}
    assert all(not c.long_term for c in strength(expand("EN 1990", cases, settings)))


def test_usual_long_term_part_of_a_combination_written_by_hand():
    """ψ2 of the kind, never more than the factor itself, and with its sign."""
    cases = [case("G", "permanent"), case("Q", "imposed"), case("S", "snow")]
    assert usual_long_term({0: 1.0, 1: 0.7, 2: 1.0}, cases) == {0: 1.0, 1: 0.3}
    assert usual_long_term({0: 1.0, 1: 0.2}, cases) == {0: 1.0, 1: 0.2}
    assert usual_long_term({0: 1.0, 1: -1.0}, cases) == {0: 1.0, 1: -0.3}


def test_serviceability_states_have_letters_of_their_own():
    """S characteristic, F frequent, Q quasi-permanent, V variable actions only."""
    kinds = ["characteristic", "frequent", "quasi-permanent", "variable"]
    combinations = expand("EN 1990", SMALL, {"serviceability": kinds})
    first = {c.name[0]: c.origin for c in reversed(combinations)}
    assert set(first) == {"U", "S", "F", "Q", "V"}
    assert first["V"] == "EN 1990 characteristic 6.14b variable actions, S leading with W"
    for combination in combinations:
        assert (0 in combination.factors) == (combination.name[0] != "V")
    frequent = [dict(c.factors) for c in combinations if c.name[0] == "F"]
    assert frequent == [{0: 1.0}, {0: 1.0, 1: 0.2}, {0: 1.0, 2: 0.2}]


def test_consequence_class_raises_unfavourable_actions_only():
    """K_FI multiplies 1.35 and 1.5, not the favourable 1.0 (EN 1990 B3.3), nor serviceability."""
    combinations = expand("EN 1990", SMALL, {"K_FI": 1.1})
    permanent = {c.factors[0] for c in strength(combinations)}
    assert permanent == {1.485, 1.0}
    assert max(c.factors.get(1, 0.0) for c in strength(combinations)) == 1.65
    assert (
        max(f for c in combinations[len(strength(combinations)) :] for f in c.factors.values()) == 1
    )


def test_a_set_of_internal_pressures_acts_with_every_wind_direction():
    """Cases of a second alternative set of one action act at full value with the first."""
    cases = [
        case("G", "permanent"),
        case("west", "wind"),
        case("east", "wind"),
        case("over", "wind", alternative_set="internal pressure"),
        case("under", "wind", alternative_set="internal pressure"),
    ]
    wind = {tuple(q for q in c.factors if q) for c in strength(expand("EN 1990", cases, {}))}
    alone, pairs = {(), (1,), (2,), (3,), (4,)}, {(1, 3), (1, 4), (2, 3), (2, 4)}
    assert wind == alone | pairs
    for combination in strength(expand("EN 1990", cases, {})):
        assert {f for q, f in combination.factors.items() if q} <= {1.5}


def test_actions_of_their_own_accompany_each_other():
    """Two imposed actions with names of their own have ψ0 between them, parts of one have not."""
    apart = [case("a", "imposed", action="floor"), case("b", "imposed", action="store")]
    settings = {"psi": {"store": "storage"}}
    both = [dict(c.factors) for c in strength(expand("EN 1990", apart, settings))]
    assert {0: 1.5, 1: 1.5} in both  # the store accompanies in full, ψ0 = 1
    assert {0: 1.05, 1: 1.5} in both
    parts = [case("a", "imposed"), case("b", "imposed")]
    together = [dict(c.factors) for c in strength(expand("EN 1990", parts, {}))]
    assert together == [{0: 1.5, 1: 1.5}, {0: 1.5}, {1: 1.5}]


def test_an_alternative_set_across_kinds():
    """A crane that never works in snow shares an alternative set with it."""
    cases = [
        case("G", "permanent"),
        case("snow", "snow"),
        case("crane", "imposed", alternative_set="snow"),
    ]
    assert all(len(c.factors) <= 2 for c in expand("EN 1990", cases, {}))


def test_snow_cases_that_do_act_together():
    """An empty alternative set makes a drift act with the other snow cases."""
    cases = [case("snow", "snow"), case("drift", "snow", alternative_set="")]
    got = [dict(c.factors) for c in strength(expand("EN 1990", cases, {}))]
    assert got == [{0: 1.5, 1: 1.5}, {0: 1.5}, {1: 1.5}]


def test_future_services_may_be_absent_where_they_would_help():
    """A permanent load that is not certain is left out of some uplift combinations."""
    cases = [
        case("G", "permanent"),
        case("services", "permanent", may_be_absent=True),
        case("uplift", "wind"),
    ]
    got = [dict(c.factors) for c in strength(expand("EN 1990", cases, {}))]
    assert {0: 1.0, 2: 1.5} in got
    assert {0: 1.0, 1: 1.0, 2: 1.5} in got
    assert {0: 1.35, 1: 1.35, 2: 1.5} in got
    assert {0: 0.9, 2: 1.0} in [dict(c.factors) for c in expand("ASCE 7-16 LRFD", cases, {})]


def test_settlement_is_there_or_not():
    """Every combination comes with and without the settlement."""
    cases = [case("G", "permanent"), case("pier", "settlement"), case("S", "snow")]
    got = strength(expand("EN 1990", cases, {}))
    assert {0: 1.0, 1: 1.35} in [dict(c.factors) for c in got]
    leading = [dict(c.factors) for c in got if 2 in c.factors]
    assert [f.get(1) for f in leading] == [1.35, None, 1.35, None]


def test_roof_imposed_load_may_be_combined_with_snow_on_demand():
    """EN 1991-1-1 3.3.2 keeps them apart; never_together = [] and a ψ0 bring them together."""
    cases = [case("Q", "imposed roof"), case("S", "snow")]
    usual = expand("EN 1990", cases, {})
    assert all(len(c.factors) == 1 for c in usual)
    settings = {"never_together": [], "psi": {"imposed roof": [0.7, 0.0, 0.0]}}
    both = [dict(c.factors) for c in strength(expand("EN 1990", cases, settings))]
    assert {0: 1.05, 1: 1.5} in both


def test_half_the_live_load_in_companion():
    """L may be halved in 2.3.1(3) and (4) (exception 1), never in 2.3.1(2)."""
    cases = [case("D", "permanent"), case("L", "imposed"), case("S", "snow")]
    got = [
        dict(c.factors)
        for c in strength(expand("ASCE 7-16 LRFD", cases, {"live_load_factor": 0.5}))
    ]
    assert {0: 1.2, 1: 0.5, 2: 1.6} in got
    assert {0: 1.2, 1: 1.6, 2: 0.5} in got


def test_usual_durations_follow_the_timber_standard():
    """NDS has its own table; both standards in one brief take the longer duration of each kind."""
    assert usual_durations([]) == usual_durations(["EN 1995-1-1", "EN 1993-1-1"]) == EN_DURATIONS
    assert usual_durations(["AISC 360", "NDS"]) == US_DURATIONS
    assert US_DURATIONS["imposed roof"] == "short"
    assert US_DURATIONS["snow"] == "medium"
    assert US_DURATIONS["wind"] == "instantaneous"
    both = usual_durations(["EN 1995-1-1", "NDS"])
    assert (both["wind"], both["imposed"], both["snow"]) == ("short", "long", "medium")


def test_a_case_may_give_its_own_duration():
    """Snow of short duration by national choice shortens the combinations that it is in."""
    cases = [case("G", "permanent"), case("S", "snow", duration="short")]
    durations = [c.duration for c in strength(expand("EN 1990", cases, {}))]
    assert durations == ["permanent", "short", "short"]


@pytest.mark.parametrize(
    ("value", "message"),
    [
        (
            "EN 1991",
            'brief.toml: combination_rule.rule: found "EN 1991"; expected one of "EN 1990", '
            '"ASCE 7-16 LRFD", "ASCE 7-16 ASD", "ASCE 7-22 LRFD", "ASCE 7-22 ASD". '
            'Did you mean "EN 1990"?',
        ),
        (
            {"rule": "EN 1990", "gama_Q": 1.5},
            "brief.toml: combination_rule.gama_Q: found an unknown key; expected one of "
            "expression, gamma_G_sup, gamma_G_inf, gamma_Q, xi, K_FI, psi, never_together, "
            'serviceability, equilibrium. Did you mean "gamma_Q"?',
        ),
        (
            {"rule": "EN 1990", "xi": True},
            "brief.toml: combination_rule.xi: found true; expected a number from 0.5 to 1.",
        ),
        (
            {"rule": "EN 1990", "psi": {"snoww": "snow Nordic"}},
            "brief.toml: combination_rule.psi.snoww: found an unknown action; expected a "
            'variable action of this brief: snow, wind. Did you mean "snow"?',
        ),
        (
            {"rule": "EN 1990", "never_together": [["snow", "winnd"]]},
            'brief.toml: combination_rule.never_together[1][2]: found "winnd"; expected one of '
            '"imposed", "imposed roof", "other", "snow", "temperature", "wind". '
            'Did you mean "wind"?',
        ),
        (
            {"rule": "ASCE 7-22 LRFD", "gamma_Q": 1.5},
            "brief.toml: combination_rule.gamma_Q: found an unknown key; expected one of "
            "live_load_factor, self_straining_factor, long_term_live_load, serviceability.",
        ),
    ],
)
def test_mistakes_are_told(value, message):
    """Every mistake names its key, what was found, what belongs there and the likely fix."""
    findings = Findings("brief.toml")
    assert read_rule(findings, ("combination_rule",), value, SMALL) == ()
    assert [problem.text() for problem in findings.problems] == [message]


def test_all_mistakes_are_told_at_once():
    """Three mistakes in one rule are three problems of one error."""
    with pytest.raises(InputError) as caught:
        expand("EN 1990", SMALL, {"xi": 2, "K_FI": "high", "expresion": "6.10"})
    assert [p.place for p in caught.value.problems] == ["expresion", "xi", "K_FI"]


def test_kinds_that_asce7_does_not_cover_are_refused():
    """A case of kind other has no factor in ASCE 7."""
    with pytest.raises(InputError, match=r'case "fire" of kind "other"'):
        expand("ASCE 7-16 LRFD", [*SMALL, case("fire", "other")], {})


def test_cases_of_two_kinds_in_one_action_are_refused():
    """An action has one kind, which gives its ψ."""
    cases = [case("a", "snow", action="roof"), case("b", "wind", action="roof")]
    with pytest.raises(InputError, match="cases of one kind in one action; its first case is snow"):
        expand("EN 1990", cases, {})


def test_a_flood_of_free_parts_is_refused_at_once():
    """Forty imposed cases that may act in any selection are told before they are multiplied."""
    cases = [case(f"bay {i}", "imposed") for i in range(40)]
    with pytest.raises(InputError) as caught:
        expand("EN 1990", cases, {})
    assert caught.value.problems[0].fix == (
        'Give cases of "imposed" that never act together the same alternative_set, or join those '
        "that always do in one case."
    )


def test_usual_psi_values_are_said():
    """Where Table A1.1 leaves a choice, the row taken is told as a caution; a given one is not."""
    findings = Findings("brief.toml")
    read_rule(findings, (), "EN 1990", SMALL)
    assert findings.cautions == [
        "Combination rule EN 1990: snow takes ψ0, ψ1, ψ2 = 0.5, 0.2, 0 (sites up to 1000 m "
        "outside the Nordic countries); set psi where that does not hold."
    ]
    findings = Findings("brief.toml")
    read_rule(findings, (), {"rule": "EN 1990", "psi": {"snow": "snow Nordic"}}, SMALL)
    assert findings.cautions == []


@pytest.mark.parametrize(
    ("edition", "level"), [("7-16", "service-level"), ("7-22", "strength-level")]
)
def test_the_level_of_wind_and_snow_is_said(edition, level):
    """Wind is strength-level in both editions, snow in 7-22 only (recalled)."""
    findings = Findings("brief.toml")
    read_rule(findings, (), f"ASCE {edition} LRFD", SMALL)
    assert findings.cautions == [
        f"Combination rule ASCE {edition}: wind cases count as strength-level wind (maps of 7-10 "
        "and later); pressures from older maps do not belong here.",
        f"Combination rule ASCE {edition}: snow cases count as {level} snow of that edition.",
    ]


def test_permanent_load_stays_permanent_beside_a_temperature_case():
    """1.4D has the time effect factor of permanent load (NDS Table N3), temperature or not."""
    cases = [case("D", "permanent"), case("T", "temperature")]
    made = strength(expand("ASCE 7-16 LRFD", cases, {}, ["NDS"]))
    alone = [c for c in made if "2.3.1(1)" in c.origin]
    assert [dict(c.factors) for c in alone] == [{0: 1.4}, {0: 1.4, 1: 1.0}]
    assert {c.duration for c in alone} == {"permanent"}


@pytest.mark.parametrize(
    ("standards", "duration", "cautioned"),
    [
        (["EN 1995-1-1"], None, True),
        (["EC5"], "medium", True),
        (["EN 1995-1-1"], "long", False),
        (["EN 1993-1-1"], None, False),
    ],
)
def test_storage_in_timber_asks_for_its_long_duration(standards, duration, cautioned):
    """Storage acts long (EN 1995-1-1 Table 2.2, from memory), other imposed load medium."""
    findings = Findings("brief.toml")
    cases = [case("G", "permanent"), case("goods", "imposed", duration=duration)]
    rule = {"rule": "EN 1990", "psi": {"imposed": "storage"}}
    assert read_rule(findings, ("combination_rule",), rule, cases, standards)
    expected = (
        "Combination rule EN 1990: load case goods is storage, which acts long "
        '(EN 1995-1-1 Table 2.2), but counts as medium-term; set duration = "long".'
    )
    assert (expected in findings.cautions) == cautioned
