"""Drowned weirs."""

import pytest

from toeline.hydraulics.weir import drowned_weir_factor, side_weir_discharge, weir_discharge


@pytest.fixture(
    params=[
        (0.0, 1.0),
        (0.2, 0.9646),
        (0.4, 0.8938),
        (0.5, 0.8454),
        (0.6, 0.7861),
        (0.8, 0.6163),
        (0.9, 0.4770),
        (1.0, 0.0),
    ],
    ids=lambda row: f"h2/h1={row[0]}",
)
def villemonte_1947(request):
    """h₂/h₁, Q/Q₁ = (1 − (h₂/h₁)^1.5)^0.385. Formula from memory (Villemonte 1947, Engineering News-Record 139),
    recomputed.
    """
    return request.param


def test_villemonte_1947(villemonte_1947):
    ratio, share = villemonte_1947
    assert drowned_weir_factor(0.6, 0.6 * ratio) == pytest.approx(share, abs=6e-5)
    assert weir_discharge(1.7, 3.0, 10.0, 10.6, 10.0 + 0.6 * ratio) == pytest.approx(
        1.7 * 3.0 * 0.6**1.5 * share, abs=2e-4
    )


def test_drowned_side_weir(villemonte_1947):
    """The same law beside a canal; a centimetre between both levels is left out, where it is scaled (choice)."""
    ratio, share = villemonte_1947
    if ratio == 1.0:
        share = 0.0
    passed = side_weir_discharge(1.7, 3.0, 10.0, 10.6, 10.0 + 0.6 * ratio)
    assert passed == pytest.approx(1.7 * 3.0 * 0.6**1.5 * share, abs=2e-4)
