"""Published policies on small missions, as whole budgets: from the legs to the propellant."""

from typing import Any

import pytest

from burntally.model.budget import Budget
from tests.published.cases import Case, cases
from tests.unit.budget.designs import branch, budget_of, burn, design, findings, stage

SECONDS_PER_YEAR = 365.25 * 86400.0


def whole(case: Case, start: dict[str, Any], legs: list[dict[str, Any]], rules: dict[str, Any]) -> dict[str, Any]:
    """The mission of a case about a body of its own, with the propellant that the case loads."""
    given = case.inputs
    tug = stage(
        dry_mass=given["nominal_dry_mass_kg"],
        propellants=[{"mass": case.expected["total_propellant_kg"]}],
        engines=[{"thrust": 400.0, "isp": given["isp_s"]}],
    )
    plain = design(legs, tug, start={"kind": "orbit", "body": "Tessaly", **start}, **rules)
    body = {"gravitational_parameter": given["mu_m3_per_s2"], "radius": given["body_radius_m"]}
    plain["mission"]["system"] = {"bodies": [{"name": "Tessaly", **body}]}
    return plain


def geostationary(case: Case) -> dict[str, Any]:
    given = case.inputs
    geo = given["geo_radius_m"] - given["body_radius_m"]
    upkeep = given["station_keeping_m_per_s_per_year"]
    return whole(
        case,
        {"periapsis": given["gto_perigee_alt_m"], "apoapsis": geo, "inclination": given["inclination_deg"]},
        [
            {"kind": "transfer", "to": {"altitude": geo, "inclination": 0.0}},
            {"kind": "coast", "duration": given["years"] * SECONDS_PER_YEAR, "upkeep_per_year": upkeep},
            {"kind": "transfer", "to": {"altitude": geo + given["graveyard_raise_m"]}},
        ],
        {"preset": "esa-2012"},
    )


def observer(case: Case) -> dict[str, Any]:
    given = case.inputs
    upkeep = given["orbit_maintenance_m_per_s_per_year"]
    return whole(
        case,
        {"altitude": given["alt_m"]},
        [
            burn(given["launcher_dispersion_m_per_s"], category="injection_error"),
            {"kind": "coast", "duration": given["years"] * SECONDS_PER_YEAR, "upkeep_per_year": upkeep},
            {"kind": "deorbit", "periapsis": given["deorbit_perigee_alt_m"]},
        ],
        {
            "preset": "esa-mar",
            # The preset leaves these to the project.
            "mass_contingency": given["margins"]["system_mass"],
            "contingency": [{"category": "maintenance", "fraction": given["margins"]["stochastic"]}],
        },
    )


def weights(budget: Budget) -> dict[str, float]:
    """What a budget says about mass, as the cases name it."""
    load = budget.stages[0].loads[0]
    return {
        "dry_mass_with_margin_kg": budget.stages[0].dry_mass.allowable,
        "total_propellant_kg": load.burned + load.left + load.residual,
        "residual_propellant_kg": load.residual,
        "wet_mass_kg": budget.initial_mass,
    }


def tight(case: Case) -> float:
    """How far the last digit of the propellant may move the margin [m/s]."""
    exhaust_speed: float = case.inputs["isp_s"] * case.inputs["g0_m_per_s2"]
    propellant: float = case.expected["total_propellant_kg"]
    wet: float = case.expected["wet_mass_kg"]
    return exhaust_speed * case.tolerance["relative"] * propellant / (wet - propellant)


E2E_01 = cases("end_to_end")["e2e-01"]
E2E_03 = cases("end_to_end")["e2e-03"]
BOTH = pytest.mark.parametrize(
    "case, plain",
    [(E2E_01, geostationary(E2E_01)), (E2E_03, observer(E2E_03))],
    ids=["e2e-01", "e2e-03"],
)


def test_a_geostationary_satellite_under_esa_2012() -> None:
    budget = budget_of(geostationary(E2E_01))
    apogee, upkeep, graveyard = branch(budget).legs
    E2E_01.agree(
        {
            "apogee_burn_m_per_s": apogee.required,
            "graveyard_m_per_s": graveyard.required,
            "delta_v_unmargined_m_per_s": apogee.required + upkeep.required + graveyard.required,
            "delta_v_with_margin_m_per_s": branch(budget).charged,
            **weights(budget),
        }
    )


def test_an_earth_observer_under_esa_mar() -> None:
    budget = budget_of(observer(E2E_03))
    _, upkeep, deorbit = branch(budget).legs
    added = deorbit.contingency
    E2E_03.agree(
        {
            "deorbit_m_per_s": deorbit.required,
            "deterministic_margin_m_per_s": added.fraction + added.floor + added.fixed,
            "delta_v_unmargined_m_per_s": upkeep.required + deorbit.required,
            "delta_v_with_margin_m_per_s": branch(budget).charged,
            **weights(budget),
        }
    )


@BOTH
def test_the_propellant_of_the_case_pays_for_it_all_and_no_more(case: Case, plain: dict[str, Any]) -> None:
    assert budget_of(plain).margin == pytest.approx(0.0, abs=tight(case))


@BOTH
def test_a_little_more_propellant_closes(case: Case, plain: dict[str, Any]) -> None:
    plain["vehicle"]["stages"][0]["propellants"][0]["mass"] *= 1.0 + 2.0 * case.tolerance["relative"]
    assert budget_of(plain).closes


@BOTH
def test_a_little_less_propellant_does_not_close(case: Case, plain: dict[str, Any]) -> None:
    plain["vehicle"]["stages"][0]["propellants"][0]["mass"] *= 1.0 - 2.0 * case.tolerance["relative"]
    budget = budget_of(plain)
    assert not budget.closes
    assert findings(budget, "leg-unpaid")
