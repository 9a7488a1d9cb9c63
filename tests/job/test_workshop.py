"""The shop's own settings, from the files in its data directory to what a job asks for, offers and reckons."""

import json
from pathlib import Path

import pytest

from tests.job.stand_in import PROFILE, Clock, StandIn
from triage import cli
from triage.errors import CatalogError, EntryError
from triage.job import workshop
from triage.job.bench import Bench
from triage.job.wiring import Wiring

METERS = """
[[instrument]]
name = "old hand meter"
[[instrument.function]]
key = "volts_dc"
ranges = [20.0, 1000.0]
percent = [0.5]
counts = [2]
count_size = [0.01, 1.0]
[[instrument.function]]
key = "ohms"
ranges = [200.0, 2e6]
percent = [1.0]
counts = [2]
count_size = [0.1, 1e3]
"""

DRAWERS = """
[[item]]
type = "330k high-voltage film 0.5 W 1000 V"
quantity = 12
where = "drawer 4"
price = 0.08
[[item]]
type = "UF4007"
quantity = 20
where = "box <b>2</b>"
[[item]]
type = "unheard-of 9"
quantity = 1
"""

SHOP = """
[shop]
rate_per_hour = 0.0
[new_adapter]
harbour-handset-charger = 99.5
[[supplier]]
file = "list.csv"
"""

LIST = "type;price;stock;order\nUF4007;0,12;500;77-1\n1N4937;0,05;10;77-2\n"


@pytest.fixture
def data(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path))
    folder = tmp_path / "triage"
    folder.mkdir()
    return folder


def functions_asked_for(path: Path) -> set[str]:
    """Every meter function that a job asks for until nothing is left to ask, each reading skipped as soon as asked for."""
    bench = Bench.create(PROFILE, path, Wiring(), Clock())
    bench.prepare()
    bench.complain("hums", "hum or ripple")
    bench.acknowledge("all")
    bench.see("sound")
    view = bench.read("volts_dc", "bulk", "pgnd", "cold", "0.2")
    asked = set()
    for _ in range(150):
        one = view.suggestion
        if one is None:
            break
        asked.add(one.function)
        view = bench.skip(one.function, one.plus, one.minus, one.condition, "no")
    return asked


def test_a_meter_the_shop_does_not_own_is_never_asked_for(data: Path, tmp_path: Path) -> None:
    before = functions_asked_for(tmp_path / "a.toml")
    assert before & {"capacitance", "esr", "diode"}, "without a file the usual meters are asked for"
    (data / "instruments.toml").write_text(METERS, encoding="utf-8")
    assert functions_asked_for(tmp_path / "b.toml") <= {"ohms", "volts_dc"}


def test_the_retest_takes_the_accuracy_of_the_own_meter(data: Path, tmp_path: Path) -> None:
    """2 % below the limit: clear with the shipped meter's 0.5 % + 2 counts, too close to call with 9 %."""
    bench = Bench.create(PROFILE, tmp_path / "a.toml", StandIn(), Clock())
    line = next(line for line in bench.lines if line.key == "output no load")
    assert line.high is not None
    reading = f"{0.98 * line.high:.4f} V"
    from triage.job.proof import answer

    assert answer(bench.lines, line.key, reading).verdict == "pass"
    (data / "instruments.toml").write_text(METERS.replace("percent = [0.5]", "percent = [9.0]"), encoding="utf-8")
    found = answer(bench.lines, line.key, reading)
    assert (found.verdict, found.instrument) == ("too close to call", "old hand meter")


def test_drawers_and_lists_reach_the_candidates_and_the_command_line(
    data: Path, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (data / "drawers.toml").write_text(DRAWERS, encoding="utf-8")
    (data / "shop.toml").write_text(SHOP, encoding="utf-8")
    (data / "list.csv").write_text(LIST, encoding="utf-8")
    job = str(tmp_path / "cube.toml")
    Bench.create(PROFILE, Path(job), Wiring(), Clock()).release()
    bench = Bench.open(Path(job), Wiring(), Clock())
    found = {one.type: one for one in bench.candidates("D2")}
    mine = found.get("UF4007") or bench.ask("D2", "UF4007")
    assert (mine.stock, mine.where, mine.price) == (20, "box <b>2</b>", 0.12)
    assert any("list.csv" in note and "77-1" in note for note in mine.notes)
    bench.release()
    assert cli.main(["drawers"]) == 0
    shown = capsys.readouterr().out
    assert "drawer 4" in shown and "not in the catalog" in shown
    assert cli.main(["drawers", "uf4", "--json"]) == 0
    assert [one["type"] for one in json.loads(capsys.readouterr().out)] == ["UF4007"]
    assert cli.main(["candidates", job, "D2", "UF4007"]) == 0
    assert "20 in box <b>2</b>" in (shown := capsys.readouterr().out) and "0.12" in shown
    assert cli.main(["combine", job, "R1"]) == 0
    shown = capsys.readouterr().out
    assert "in series" in shown and "voltage at most" in shown
    assert cli.main(["combine", job, "RF1"]) == 0
    assert "no combination" in capsys.readouterr().out, "a safety part is replaced like for like"


def test_rate_and_price_of_the_shop_decide_what_is_worth_while(data: Path, tmp_path: Path) -> None:
    bench = Bench.create(PROFILE, tmp_path / "a.toml", StandIn(), Clock())
    bench.prepare()
    bench.complain("dead", "dead")
    bench.acknowledge("all")
    bench.read("volts_dc", "bulk", "pgnd", "cold", "0.2")
    bench.read("ohms", "mains_l", "rect", "cold", "OL")

    def costs() -> dict[str, float]:
        return {one.choice: one.cost for one in bench.worth().options}

    house = costs()
    (data / "shop.toml").write_text("[shop]\nrate_per_hour = 0.0\n", encoding="utf-8")
    unpaid = costs()
    assert unpaid["repair"] < house["repair"] and unpaid["replace"] < house["replace"]
    dear = "[shop]\nrate_per_hour = 0\n[new_adapter]\nharbour-handset-charger = 99.5\n"
    (data / "shop.toml").write_text(dear, encoding="utf-8")
    assert costs()["replace"] - unpaid["replace"] == pytest.approx(99.5 - 8.0), "8 is the house price up to 5 W"
    assert bench.worth(new_price=5.0).options != bench.worth().options, "a price that is typed goes before the file"


@pytest.mark.parametrize(
    ("text", "fault"),
    [
        ("[shop]\nrate = -1", "rate.*from 0 up"),
        ("[shop]\nwages = 1", "wages.*one of rate"),
        ("[shop]\nrate_per_hour = inf", "from 0 up"),
        ("shop = 3", r"a table \[shop\]"),
        ("[[supplier]]\nfile = '../../etc/passwd'", "name of a CSV file"),
        ("[[supplier]]\nfile = 3", "name of a CSV file"),
        ("[[supplier]]\nfile = 'a.csv'\ncolumns = { colour = 'x' }", "headings for type, price"),
        ("colour = 'red'", "colour: expected one of shop"),
    ],
)
def test_each_fault_of_the_shop_file_is_named(tmp_path: Path, text: str, fault: str) -> None:
    path = tmp_path / "shop.toml"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(EntryError, match=fault):
        workshop.read_shop(path)


def test_a_list_that_is_not_there_is_named(data: Path) -> None:
    (data / "shop.toml").write_text(SHOP, encoding="utf-8")
    with pytest.raises(CatalogError, match=r"list\.csv: cannot be read"):
        workshop.own_suppliers()


def test_a_changed_file_is_read_again(data: Path) -> None:
    assert workshop.own_drawers().items == ()
    path = data / "drawers.csv"
    path.write_text("type,quantity\n1N4007,3\n", encoding="utf-8")
    assert workshop.own_drawers().items[0].quantity == 3
    path.write_text("type,quantity\n1N4007,30\n", encoding="utf-8")
    assert workshop.own_drawers().items[0].quantity == 30
