"""Every message for a fault in the names, sections, surfaces and pools of a canal file."""

import pytest

CASES = [
    # text in canal.toml, text in its place, messages
    (
        'name = "Test canal"\n',
        "",
        [
            "canal.toml: name: required, but not given",
        ],
    ),
    (
        'units = "metric"',
        'units = "imperial"',
        [
            'canal.toml:2: units: found "imperial"; allowed: "metric" or "us customary"',
        ],
    ),
    (
        'units = "metric"',
        'units = "metric"\nforecast = []',
        [
            'canal.toml:3: forecast: unknown key; known: "name", "units", "sections", "surfaces", "pools", '
            '"gates", "offtakes", "escapes", "gauges", "losses", "roughness_calendar", "head", "tail", "limits", '
            '"call"',
        ],
    ),
    (
        "bottom_width = 6.0",
        "botom_width = 6.0",
        [
            'canal.toml:6: sections basin botom_width: unknown key; did you mean "bottom_width"?',
        ],
    ),
    (
        "bottom_width = 6.0",
        "bottom_width = true",
        [
            "canal.toml:6: sections basin bottom_width: found true; allowed: a finite number in m, or text "
            'such as "2.5 m" with one of the units m, km, cm, mm, ft, in, mi',
        ],
    ),
    (
        "bottom_width = 6.0",
        "bottom_width = nan",
        [
            "canal.toml:6: sections basin bottom_width: found nan; allowed: a finite number in m, or text "
            'such as "2.5 m" with one of the units m, km, cm, mm, ft, in, mi',
        ],
    ),
    (
        "bottom_width = 6.0",
        "bottom_width = 1e400",
        [
            "canal.toml:6: sections basin bottom_width: found inf; allowed: a finite number in m, or text "
            'such as "2.5 m" with one of the units m, km, cm, mm, ft, in, mi',
        ],
    ),
    (
        "bottom_width = 6.0",
        "bottom_width = -6",
        [
            "canal.toml:6: sections basin bottom_width: found -6; allowed: above 0 m, up to 1000 m",
        ],
    ),
    (
        "bottom_width = 6.0",
        'bottom_width = "6"',
        [
            'canal.toml:6: sections basin bottom_width: found "6"; allowed: a finite number in m, or text '
            'such as "2.5 m" with one of the units m, km, cm, mm, ft, in, mi',
        ],
    ),
    (
        "bottom_width = 6.0",
        'bottom_width = "6 yd"',
        [
            'canal.toml:6: sections basin bottom_width: found "6 yd"; allowed: a finite number in m, or text '
            'such as "2.5 m" with one of the units m, km, cm, mm, ft, in, mi',
        ],
    ),
    (
        "bottom_width = 6.0",
        "bottom_width = 123456789012345678901234567890",
        [
            "canal.toml:6: sections basin bottom_width: found a whole number of more than 20 digits; "
            "allowed: above 0 m, up to 1000 m",
        ],
    ),
    (
        "bottom_width = 6.0",
        "diameter = 6.0",
        [
            'canal.toml:4: sections basin bottom_width: required with shape = "rectangle", but not given',
            'canal.toml:6: sections basin diameter: not used with shape = "rectangle"; leave it out, or '
            "choose another shape",
        ],
    ),
    (
        'shape = "rectangle"',
        'shape = "rectangel"',
        [
            'canal.toml:5: sections basin shape: found "rectangel"; allowed: "rectangle", "trapezoid", '
            '"triangle", "circle" or "points"',
        ],
    ),
    (
        "side_slope = 1.5\n",
        'side_slope = "1:1.5"\n',
        [
            'canal.toml:13: sections canal side_slope: found "1:1.5"; allowed: a number above 0, up to 10',
        ],
    ),
    (
        "roughness = 0.014",
        "roughness = 0.14e-3",
        [
            "canal.toml:7: sections basin roughness: found 0.00014; allowed: from 0.005 to 0.3",
        ],
    ),
    (
        'shape = "rectangle"\nbottom_width = 6.0',
        'shape = "points"\npoints = [[0.0, 3.0], [6.0, 0.0], [2.0, 0.0], [8.0, 3.0]]',
        [
            "canal.toml:6: sections basin points[3][1]: this station lies left of the one before; order them left "
            "to right",
        ],
    ),
    (
        'shape = "rectangle"\nbottom_width = 6.0',
        'shape = "points"\npoints = [[2.0, 3.0], [2.0, 0.0], [2.0, 3.0]]',
        [
            "canal.toml:6: sections basin points: the points have no width: first and last station are the same",
        ],
    ),
    (
        "lining_height = 2.5",
        "lining_height = 3.5",
        [
            "canal.toml:15: sections canal lining_height: found 3.5 m; allowed: up to the bank_height, 3 m",
        ],
    ),
    (
        "apron = { protected = true, apron = true }",
        "apron = { protected = false, apron = true }",
        [
            "canal.toml:19: surfaces apron protected: found false; allowed: true, because apron = true",
        ],
    ),
    (
        "velocity_limit = 2.5",
        "velocity_limit = 0",
        [
            "canal.toml:21: surfaces lining velocity_limit: found 0; allowed: above 0 m/s, up to 50 m/s",
        ],
    ),
    (
        'name = "Mill pool"\nbed',
        'name = "head"\nbed',
        [
            'canal.toml:35: pools[2] "head" name: found "head", which means an end of the canal; choose another name',
        ],
    ),
    (
        'name = "Mill pool"\nbed',
        'name = "Upper pool"\nbed',
        [
            'canal.toml:35: pools[2] "Upper pool" name: found "Upper pool", which is taken by an earlier one in pools',
            'canal.toml:86: offtakes[2] "Farm turnout" pool: found "Mill pool", which is not described; '
            'known: "Upper pool"',
            'canal.toml:95: offtakes[3] "South weir" pool: found "Mill pool", which is not described; known: '
            '"Upper pool"',
        ],
    ),
    (
        "slope = 0.0002 },\n]\npoint",
        'slope = "steep" },\n]\npoint',
        [
            'canal.toml:30: pools[1] "Upper pool" stretches[3] slope: found "steep"; allowed: a number from '
            "-0.1 to 0.1",
        ],
    ),
    (
        '{ length = 12.0, section = "basin", surface = "apron" },\n  { length = 8.0',
        '{ length = 12.0, section = "basin", surface = "apron", transition = true },\n  { length = 8.0',
        [
            'canal.toml:28: pools[1] "Upper pool" stretches[1] transition: found true; the first stretch has '
            "no section before it",
        ],
    ),
    (
        'section = "canal", surface = "riprap", transition = true',
        'section = "canall", surface = "riprap", transition = true',
        [
            'canal.toml:29: pools[1] "Upper pool" stretches[2] section: found "canall", which is not '
            'described; did you mean "canal"?',
        ],
    ),
    (
        'section = "canal", surface = "riprap", transition = true',
        'section = "canal", surface = "concrete", transition = true',
        [
            'canal.toml:29: pools[1] "Upper pool" stretches[2] surface: found "concrete", which is not '
            'described; known: "apron", "riprap", "lining"',
        ],
    ),
    (
        'surface = "riprap", transition = true',
        'surface = "riprap", transition_loss = 0.2',
        [
            'canal.toml:29: pools[1] "Upper pool" stretches[2] transition_loss: not used without transition = true',
        ],
    ),
    (
        "chainage = 500.0",
        "chainage = 1500.0",
        [
            'canal.toml:32: pools[1] "Upper pool" point_losses[1] "bridge" chainage: found 1500 m; allowed: '
            "up to the pool's end, 1000 m",
        ],
    ),
    (
        "target_level = 21.8",
        "target_level = 19.5",
        [
            'canal.toml:26: pools[1] "Upper pool" target_level: found 19.5 m; allowed: above the bed at the '
            "pool's lower end, 19.804 m",
        ],
    ),
    (
        "target_level = 21.8",
        "target_level = 23.8",
        [
            'canal.toml:26: pools[1] "Upper pool" target_level: found 23.8 m; allowed: up to the bank at the '
            "pool's lower end, 22.804 m",
        ],
    ),
    (
        'stretches = [\n  { length = 12.0, section = "basin", surface = "apron" },\n  { length = 1988.0, '
        'section = "canal", surface = "lining", slope = 0.0002 },\n]',
        "stretches = []",
        [
            'canal.toml:38: pools[2] "Mill pool" stretches: found 0 in number; allowed: at least 1',
        ],
    ),
]


@pytest.mark.parametrize(("old", "new", "messages"), CASES)
def test_a_broken_canal_is_refused_with_its_line_and_what_is_allowed(folder, old, new, messages):
    folder.replace("canal.toml", old, new)

    assert folder.messages() == messages
