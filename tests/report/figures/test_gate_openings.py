"""Gate openings with orders and states."""

import json

import numpy as np
import pytest
from tests.report.figures.drawn import areas, line, minutes, panel, texts

from toeline.report.figures.gate_openings import pictures
from toeline.report.style import AVOIDED, BAY_OPENING, FLOW_STATES, JUMP_STATES, ORDER_STATUSES, RULE_MOVE


def orders(*, status: list[int], source: list[str]) -> dict[str, np.ndarray]:
    """Orders to the Middle check every ten minutes, each opening it by 5 cm from 0.40 m on."""
    count = np.arange(len(status))
    return {
        "order_time": 600.0 * (count + 1), "order_gate": np.full(count.size, "Middle check", object),
        "order_opening_before": 0.40 + 0.05 * count, "order_opening_after": 0.45 + 0.05 * count,
        "order_completed": 600.0 * (count + 1) + 60.0, "order_status": np.array(status),
        "order_source": np.array(source, object), "order_kind": 0 * count, "order_value": 0.45 + 0.05 * count,
        "order_reason": np.full(count.size, "", object),
    }  # fmt: skip


@pytest.fixture
def picture(invented_run, metric):
    opening = np.repeat(np.linspace(0.40, 0.60, 49)[:, None], 2, axis=1)
    flow = np.full((49, 2), 3)
    flow[:7, 0] = 1
    given = orders(status=[0, 1, 2, 0], source=["schedule", "schedule", "schedule", "hold upstream level"])
    avoided = {"avoided_openings": json.dumps({"Middle check": [[0.0, 0.05]]})}
    run = invented_run(
        attributes=avoided, gate_opening=opening, gate_flow_state=flow, gate_max_opening=np.array([1.2, 1.2]), **given
    )
    (found,) = pictures(run, metric)
    return found


def test_the_opening_is_a_line_of_its_own(picture):
    x, opening = line(panel(picture.figure, "Middle check"), "opening")
    assert opening == pytest.approx(np.linspace(0.40, 0.60, 49))
    assert minutes(panel(picture.figure, "Middle check"), x[-1]) == 240.0


@pytest.mark.parametrize(("status", "place"), [("accepted", 0), ("trimmed", 1), ("refused", 2)])
def test_orders_are_marked_by_what_became_of_them(status, place, picture):
    axes = panel(picture.figure, "Middle check")
    x, opening = line(axes, ORDER_STATUSES[status].word)
    assert minutes(axes, x[0]) == 10.0 * (place + 1)
    assert opening == pytest.approx([0.45 + 0.05 * place])


def test_moves_by_a_rule_have_their_own_mark(picture):
    x, _ = line(panel(picture.figure, "Middle check"), RULE_MOVE.word)
    assert minutes(panel(picture.figure, "Middle check"), x[0]) == 40.0


def test_strips_tell_flow_and_jump(picture):
    axes = panel(picture.figure, "Middle check")
    (free,), (drowned,) = (list(areas(axes, FLOW_STATES[state].word)) for state in ("free", "drowned"))
    assert (minutes(axes, free[0]), minutes(axes, free[1])) == (0.0, 32.5)
    assert minutes(axes, drowned[1]) == 240.0
    (roller,) = areas(axes, JUMP_STATES["drowned"].word)
    assert roller[3] < drowned[2] < 0.0


def test_openings_not_to_be_held_are_marked_at_their_gate_alone(picture):
    marked = {
        name: [patch.get_y() + patch.get_height() for patch in panel(picture.figure, name).patches
               if patch.get_label() == AVOIDED.word]
        for name in ("Middle check", "Last check")
    }  # fmt: skip
    assert marked == {"Middle check": [0.05], "Last check": []}


def test_bays_that_move_apart_have_lines_of_their_own(invented_run, metric):
    bays = np.array([0.3, 0.5]) * np.ones((49, 1))
    (picture,) = pictures(invented_run(bay_opening=bays, gate_opening=np.full((49, 2), 0.4)), metric)
    gate = invented_run()["bay_gate"].values[0]
    drawn = [one.get_ydata()[0] for one in panel(picture.figure, gate).lines if one.get_label() == BAY_OPENING.word]
    assert drawn == pytest.approx([0.3, 0.5])
    assert f"{gate}, bay 1: opening [m]" in picture.tables[""].csv_text()


def test_only_what_occurs_stands_in_the_legend(picture):
    shown = texts(picture.figure)
    assert ORDER_STATUSES["trimmed"].word in shown
    assert ORDER_STATUSES["replaced"].word not in shown
    assert FLOW_STATES["reverse"].word not in shown


def test_the_orders_are_a_table_of_their_own(picture):
    lines = picture.tables["orders"].csv_text().splitlines()
    assert len(lines) == 5
    assert lines[1].startswith(
        "2031-05-04T06:10:00+02:00,Middle check,all,0.4000,0.4500,2031-05-04T06:11:00+02:00,accepted"
    )
