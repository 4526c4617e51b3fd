"""End of life, against closed forms."""

from burntally_service.kernels import manoeuvres, transfers
from burntally_service.kernels.manoeuvres import Apsis
from tests.published.cases import cases

CASES = cases("disposal")


def test_dis_01_graveyard() -> None:
    given = CASES["dis-01"].inputs
    r = given["geo_radius_m"]
    CASES["dis-01"].agree(
        {"delta_v_total_m_per_s": transfers.hohmann(given["mu_m3_per_s2"], r, r + given["raise_m"]).dv}
    )


def test_dis_03_low_orbit() -> None:
    given = CASES["dis-03"].inputs
    r, radius = given["body_radius_m"] + given["alt_m"], given["body_radius_m"]
    CASES["dis-03"].agree(
        {
            "delta_v_m_per_s": [
                manoeuvres.apsis_change(given["mu_m3_per_s2"], Apsis(r, r), radius + alt, 0.0).dv
                for alt in given["perigee_alt_m"]
            ]
        }
    )
