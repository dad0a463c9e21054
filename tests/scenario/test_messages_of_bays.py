"""Every message for a fault in orders to bays, in stuck bays, and in their openings at the start."""

from pathlib import Path

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


@pytest.mark.parametrize(
    ("is_separate", "message"),
    [
        (True, 'bay: found 3; allowed: 1 to 2, the bays of "Upper check"'),
        (False, 'bay: not used with "Upper check", whose bays move together; separate_bays = true in the canal file'),
    ],
)
def test_message_of_a_stuck_bay(folder, is_separate, message):
    if is_separate:
        folder.replace("canal.toml", BAYS, f"{BAYS}\nseparate_bays = true")
    stuck = '{ gate = "Upper check", bay = 3, from = "06:00", until = "07:00" }'
    folder.replace("day.toml", "[plans.proposed]\n", f"[plans.proposed]\nstuck = [{stuck}]\n")
    assert folder.messages() == [f"day.toml:28: plans proposed stuck[1] {message}"]


def test_a_bay_of_too_many_digits_in_a_file_of_orders(folder):
    Path("orders.csv").write_text(f"at,gate,bay,by\n06:30,Upper check,{'9' * 5000},0.1\n", encoding="utf-8")
    [message] = [text for text in folder.messages() if "bay" in text]
    assert message.startswith('orders.csv:2: bay: found "999')
    assert message.endswith("allowed: a whole number from 1 to 50")
