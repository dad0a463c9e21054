"""Every message for a fault in orders to bays and in their openings at the start."""

import pytest

BAYS = "bays = 2\nbay_width = 2.5"
CASES = [
    # whether the bays of Upper check are separate, text in day.toml, text in its place, message
    (
        True,
        'gate = "Upper check", by',
        'gate = "Upper check", bay = 3, by',
        "bay: found 3; allowed: 1 to 2, the bays of",
    ),
    (
        True,
        'gate = "Upper check", by',
        'gate = "Upper check", bay = 0, by',
        "bay: found 0; allowed: a whole number from 1",
    ),
    (
        False,
        'gate = "Upper check", by',
        'gate = "Upper check", bay = 1, by',
        'not used with "Upper check", whose bays move',
    ),
]


@pytest.mark.parametrize(("is_separate", "old", "new", "message"), CASES)
def test_message(folder, is_separate, old, new, message):
    if is_separate:
        folder.replace("canal.toml", BAYS, f"{BAYS}\nseparate_bays = true")
    folder.replace("day.toml", old, new)
    found = folder.messages()
    assert len(found) == 1
    assert message in found[0]
