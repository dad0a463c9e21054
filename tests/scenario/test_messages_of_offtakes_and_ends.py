"""Every message for a fault in the offtakes and the ends of a canal file."""

import pytest

CASES = [
    # text in canal.toml, text in its place, messages
    (
        'pool = "Upper pool"',
        'pool = "Uper pool"',
        [
            'canal.toml:79: offtakes[1] "North lateral" pool: found "Uper pool", which is not described; did '
            'you mean "Upper pool"?',
        ],
    ),
    (
        "chainage = 900.0",
        "chainage = 1000.5",
        [
            'canal.toml:80: offtakes[1] "North lateral" chainage: found 1000.5 m; allowed: up to the pool\'s '
            "end, 1000 m",
        ],
    ),
    (
        'sill_level = 20.5\n\n[[offtakes]]\nname = "Farm',
        'sill_level = 19.5\n\n[[offtakes]]\nname = "Farm',
        [
            'canal.toml:82: offtakes[1] "North lateral" sill_level: found 19.5 m; allowed: not below the bed '
            "there, 19.824 m",
        ],
    ),
    (
        "width = 0.5\nopening = 0.2",
        "width = 0.5",
        [
            'canal.toml:84: offtakes[2] "Farm turnout" opening: required with kind = "orifice", but not given',
        ],
    ),
    (
        'kind = "demand"',
        'kind = "demand"\nwidth = 2.0',
        [
            'canal.toml:82: offtakes[1] "North lateral" width: not used with kind = "demand"; leave it out, '
            "or choose another kind",
        ],
    ),
    (
        "width = 1.5",
        "width = 1.5\ncoefficient = 4",
        [
            'canal.toml:100: offtakes[3] "South weir" coefficient: found 4; allowed: above 0 m^0.5/s, up to 3 m^0.5/s',
        ],
    ),
    (
        "level = 22.5\n",
        "",
        [
            'canal.toml:101: head level: required with kind = "reservoir", but not given',
        ],
    ),
    (
        'kind = "level"\nlevel = 20.0',
        'kind = "rating"\nrating = [[19.0, 1.0], [20.0, 1.0]]',
        [
            "canal.toml:107: tail rating[2]: level and discharge must both be above those of the pair before",
        ],
    ),
    (
        'kind = "level"\nlevel = 20.0',
        'kind = "rating"\nrating = [[19.0, 1.0]]',
        [
            "canal.toml:107: tail rating: found 1 in number; allowed: at least 2",
        ],
    ),
    (
        'kind = "level"\nlevel = 20.0',
        'kind = "normal depth"\nlevel = 20.0',
        [
            'canal.toml:105: tail slope: required with kind = "normal depth", but not given',
            'canal.toml:107: tail level: not used with kind = "normal depth"; leave it out, or choose another kind',
        ],
    ),
    (
        "floor_level = 18.7",
        'floor_level = 18.7\nsection = "canal"\nstretches = [{ length = 5.0, section = "canal", surface = "lining" }]',
        [
            "canal.toml:109: tail section: not used with stretches, which carry their own",
        ],
    ),
]


@pytest.mark.parametrize(("old", "new", "messages"), CASES)
def test_a_broken_end_is_refused_with_its_line_and_what_is_allowed(folder, old, new, messages):
    folder.replace("canal.toml", old, new)

    assert folder.messages() == messages
