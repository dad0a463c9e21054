"""`toeline describe` of a canal and of a day."""

from tests.canals import day, prismatic_canal, rectangle, write_table


def test_a_canal_is_described_from_the_head_down(folder, call):
    page = call("describe", "canal.toml").stdout
    assert page.index("Upper pool") < page.index("Lower pool") < page.index("Middle check") < page.index("Last check")
    assert "  Lower pool  635.00 m      49.20 m     49.08 m  50.60 m          15.00 m\n" in page


def test_limits_of_a_canal_are_described_with_their_source(folder, call):
    canal = folder / "canal.toml"
    assert "LIMITS\n  none given; none is built in\n" in call("describe", "canal.toml").stdout
    limit = '[[limits]]\nkind = "fall"\nwindow = "1 h"\nlimit = 0.15\nsource = "standing order 7"\n'
    canal.write_text(f"{canal.read_text()}\n{limit}")
    page = call("describe", "canal.toml").stdout
    assert "  fall in 1 h, all pools, at most 0.15 m\n    standing order 7\n" in page


def test_a_day_is_described_with_the_orders_of_every_plan(folder, call):
    page = call("describe", "day.toml").stdout
    assert "ORDERS of plan hold: 0\n" in page
    assert "  06:20  Middle check  open by 0.05 m\n" in page


def test_values_are_in_the_units_of_the_day(folder, call):
    day = folder / "day.toml"
    day.write_text(day.read_text().replace("title =", 'units = "us customary"\ntitle ='))
    page = call("describe", "day.toml").stdout
    assert "3.0 ft3/s" in page
    assert "m3/s" not in page


def test_no_line_is_wider_than_80_columns(folder, call):
    canal = folder / "canal.toml"
    canal.write_text(canal.read_text().replace("Middle check", "Middle check beside the long row of old alder trees"))
    page = call("describe", "canal.toml").stdout
    assert max(len(line) for line in page.splitlines()) <= 80


def test_a_file_that_is_no_run_is_refused(folder, call):
    (folder / "run.nc").write_bytes(b"\x89HDF\r\n\x1a\n and no more")
    result = call("describe", "run.nc")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "run.nc" in result.stderr


def test_rules_are_described_with_their_settings(folder, call):
    day = folder / "day.toml"
    rule = '{ kind = "hold upstream level", gate = "Last check", gain = 0.4, hours = ["06:00", "20:00"] }'
    day.write_text(day.read_text().replace("orders = []", f"rules = [{rule}]"))
    page = " ".join(call("describe", "day.toml").stdout.split())
    assert (
        "RULES of plan hold: 1 hold upstream level: gate Last check; band 0.02 m; every 5 min; "
        "hours 06:00 to 20:00; gain 0.4 " in page
    )


def test_lead_times_of_the_pools_are_told(folder, call):
    page = call("describe", "day.toml").stdout
    assert "LEAD TIMES OF THE POOLS\n              by wave  by volume\n  Upper pool" in page


def test_a_day_without_a_steady_start_is_described_all_the_same(folder, call):
    day = folder / "day.toml"
    day.write_text(day.read_text().replace('["06:00", 0.2]', '["06:00", 9.0]'))
    page = " ".join(call("describe", "day.toml").stdout.split())
    assert "LEAD TIMES OF THE POOLS None:" in page
    assert "exceed the inflow" in page


def test_escapes_gauges_losses_and_roughness_are_described(tmp_path, call):
    call("new", str(tmp_path))
    page = " ".join(call("describe", str(tmp_path / "canal.toml")).stdout.split())
    assert "ESCAPES pool below its head crest length outside Fern escape Upper pool 1760.00 m 51.35 m" in page
    assert "Upper check, upstream upstream of Upper check 49.60 m" in page
    assert "seepage 25.0 mm/day evaporation 5.0 mm/day" in page
    assert "08-20 every pool 1.05 holds weed cut" in page


def test_weather_and_orders_to_bays_are_described(tmp_path, call):
    call("new", str(tmp_path))
    canal, day = tmp_path / "canal.toml", tmp_path / "day.toml"
    canal.write_text(
        canal.read_text().replace("bays = 1\nbay_width = 2.6", "bays = 2\nseparate_bays = true\nbay_width = 1.3")
    )
    text = day.read_text().replace('gate = "Upper check", by = 0.06', 'gate = "Upper check", bay = 2, by = 0.06')
    losses = 'rain = [["00:00", 0.0], ["12:00", "20 mm/h"]]\nseepage = { "Lower pool" = 40.0 }'
    day.write_text(f"{text}\n[losses]\n{losses}\n")
    page = " ".join(call("describe", str(day)).stdout.split())
    assert "rain 0.0 mm/day 0.0 mm/day 480.0 mm/day" in page
    assert "seepage, Lower pool 40.0 mm/day 40.0 mm/day 40.0 mm/day" in page
    assert "07:45 Upper check, bay 2 open by 0.06 m" in page
    assert "2 of 1.30 m, separate" in call("describe", str(canal)).stdout


def test_a_canal_without_gates_has_its_pages_and_no_sheets(tmp_path, monkeypatch, call):
    monkeypatch.chdir(tmp_path)
    canal = prismatic_canal(rectangle(5.0), 800.0, 2e-4, {"kind": "level", "level": 1.5})
    write_table(tmp_path / "canal.toml", canal)
    write_table(tmp_path / "day.toml", day(5.0, length="1 h"))
    assert [call(*line).exit_code for line in (("run", "day.toml"), ("describe", "day.nc"))] == [0, 0]
    sheets = call("orders", "day.nc")
    assert sheets.exit_code == 2
    assert "day.nc is of a canal without gates" in sheets.stderr
    page = call("report", "day.nc")
    assert page.exit_code == 2
    assert "day is of a canal without gates" in page.stderr
    assert call("figures", "day.nc", "--to", "pictures").exit_code == 0
