"""Every message for a fault in the gates of a canal file."""

import pytest

CASES = [
    # text in canal.toml, text in its place, messages
    (
        'downstream = "Mill pool"',
        'downstream = "Mil pool"',
        [
            'canal.toml:55: gates[2] "Upper check" downstream: found "Mil pool", which is no pool; did you '
            'mean "Mill pool"?',
        ],
    ),
    (
        'downstream = "Mill pool"',
        'downstream = "tail"',
        [
            'canal.toml:34: pools[2] "Mill pool": there is no gate between "Upper pool" and "Mill pool"',
            'canal.toml:55: gates[2] "Upper check" downstream: found "tail"; allowed: "Mill pool", which '
            'follows "Upper pool"',
        ],
    ),
    (
        'upstream = "head"',
        'upstream = "Upper pool"',
        [
            'canal.toml:46: gates[1] "Head gate" downstream: found "Upper pool"; allowed: "Mill pool", which '
            'follows "Upper pool"',
            'canal.toml:102: head kind: there is no gate between "head" and "Upper pool"',
        ],
    ),
    (
        'kind = "reservoir"\nlevel = 22.5',
        'kind = "inflow"',
        [
            'canal.toml:45: gates[1] "Head gate" upstream: found "head"; allowed only with head kind = '
            '"reservoir": an inflow enters the first pool by itself',
        ],
    ),
    (
        'upstream = "Mill pool"\ndownstream = "tail"',
        'upstream = "Upper pool"\ndownstream = "Mill pool"',
        [
            'canal.toml:68: gates[3] "Tail gate": "Upper check" already stands between "Upper pool" and '
            '"Mill pool"; gates side by side are bays of one gate',
        ],
    ),
    (
        "radius = 3.0\n",
        "",
        [
            'canal.toml:52: gates[2] "Upper check" radius: required with kind = "radial", but not given',
        ],
    ),
    (
        'kind = "vertical"\nbay_width = 4.0',
        'kind = "vertical"\nradius = 3.0\nbay_width = 4.0',
        [
            'canal.toml:48: gates[1] "Head gate" radius: not used with kind = "vertical"; leave it out, or '
            "choose another kind",
        ],
    ),
    (
        "pinion_height = 2.5",
        "pinion_height = 3.5",
        [
            'canal.toml:58: gates[2] "Upper check" pinion_height: found 3.5 m; allowed: up to the radius, 3 m',
        ],
    ),
    (
        "leaf_height = 2.4\nmax_opening = 1.5",
        "leaf_height = 2.4\nmax_opening = 5.6",
        [
            'canal.toml:63: gates[2] "Upper check" max_opening: found 5.6 m; allowed: up to pinion_height + '
            "radius, 5.5 m",
        ],
    ),
    (
        "bays = 2",
        "bays = 2.0",
        [
            'canal.toml:59: gates[2] "Upper check" bays: found 2.0; allowed: a whole number from 1 to 50',
        ],
    ),
    (
        "bay_width = 2.5",
        "bay_width = 3.5",
        [
            'canal.toml:60: gates[2] "Upper check" bay_width: found 7 m; allowed: all bays together up to '
            "the bottom_width of the floor below, 6 m",
        ],
    ),
    (
        "sill_level = 19.9",
        "sill_level = 19.7",
        [
            'canal.toml:61: gates[2] "Upper check" sill_level: found 19.7 m; allowed: not below the bed at '
            "the end of the pool above, 19.804 m",
        ],
    ),
    (
        "sill_level = 20.2",
        "sill_level = 19.9",
        [
            'canal.toml:49: gates[1] "Head gate" sill_level: found 19.9 m; allowed: not below the bed at the '
            "head of the pool below, 20 m",
        ],
    ),
    (
        "sill_level = 18.8",
        "sill_level = 18.65",
        [
            'canal.toml:74: gates[3] "Tail gate" sill_level: found 18.65 m; allowed: not below the floor '
            "beyond it, 18.7 m",
        ],
    ),
    (
        "smallest_move = 0.01",
        "smallest_move = 2",
        [
            'canal.toml:64: gates[2] "Upper check" smallest_move: found 2 m; allowed: below the max_opening, 1.5 m',
        ],
    ),
    (
        'hoist_speed = "0.10 m/min"',
        'hoist_speed = "0.10 m per min"',
        [
            'canal.toml:65: gates[2] "Upper check" hoist_speed: found "0.10 m per min"; allowed: a finite '
            'number in m/min, or text such as "2.5 m/min" with one of the units m/s, cm/s, mm/s, m/min, '
            "cm/min, mm/min, ft/s, ft/min, in/min",
        ],
    ),
    (
        "[[0.0, 0.05], [0.2, 0.25]]",
        "[[0.0, 0.05, 0.1], 3, [0.3]]",
        [
            'canal.toml:66: gates[2] "Upper check" avoid_openings[1]: found 3 in number; allowed: at most 2',
            'canal.toml:66: gates[2] "Upper check" avoid_openings[2]: found 3; allowed: a pair in an array',
            'canal.toml:66: gates[2] "Upper check" avoid_openings[3][2]: required, but not given',
        ],
    ),
    (
        "[[0.0, 0.05], [0.2, 0.25]]",
        "[[0.0, 0.05], [0.25, 0.2], [0.1, 1.6]]",
        [
            'canal.toml:66: gates[2] "Upper check" avoid_openings[2]: found [0.25 m, 0.2 m]; allowed: a '
            "rising pair up to the max_opening, 1.5 m",
            'canal.toml:66: gates[2] "Upper check" avoid_openings[3]: found [0.1 m, 1.6 m]; allowed: a '
            "rising pair up to the max_opening, 1.5 m",
            'canal.toml:66: gates[2] "Upper check" avoid_openings[3]: found [0.1 m, 1.6 m], which begins '
            "inside or below the band before it",
        ],
    ),
    (
        "[[0.0, 0.05], [0.2, 0.25]]",
        "[[0.0, 0.25], [0.2, 0.35]]",
        [
            'canal.toml:66: gates[2] "Upper check" avoid_openings[2]: found [0.2 m, 0.35 m], which begins '
            "inside or below the band before it",
        ],
    ),
    (
        'upstream = "Mill pool"\ndownstream = "tail"',
        'upstream = "tail"\ndownstream = "head"',
        [
            'canal.toml:70: gates[3] "Tail gate" upstream: found "tail", which is no pool; known: "head", '
            '"Upper pool", "Mill pool"',
        ],
    ),
]


@pytest.mark.parametrize(("old", "new", "messages"), CASES)
def test_a_broken_gate_is_refused_with_its_line_and_what_is_allowed(folder, old, new, messages):
    folder.replace("canal.toml", old, new)

    assert folder.messages() == messages
