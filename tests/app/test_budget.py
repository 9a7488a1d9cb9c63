"""Bytes at 80x24 with 256 colours, counted in a pseudo terminal; the bounds are the house's own (bad
links)."""

from tests.bench.bench_screen import measured_bytes


def test_no_key_costs_more_than_its_budget(tmp_path):
    found = measured_bytes(tmp_path)
    assert 0 < found["typed character"] <= 100
    assert 0 < found["typed character, light"] <= 100
    assert 0 < found["accepted reading"] <= 6000
    assert 0 < found["second accepted reading"] <= 6000
    assert 0 < found["cursor move in the stress list"] <= 2000
    assert found["to another screen"] <= 7000
    assert found["two idle seconds"] == 0
