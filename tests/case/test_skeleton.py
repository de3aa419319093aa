"""The drafted case file, as text."""

import tomllib

from hypothesis import given
from hypothesis import strategies as st

from forensics.case.settings import ChannelChoice
from forensics.case.skeleton import Known, write_skeleton

names = st.text(min_size=1, max_size=40)


@given(names, names, names)
def test_any_name_stays_itself_through_toml(well, column, path):
    known = Known("run", (path,), well=well, choices={"hookload": ChannelChoice(column, "kN")})
    tree = tomllib.loads(write_skeleton(known))
    assert tree["case"]["well"] == well
    assert tree["logs"]["time"] == [path]
    assert tree["logs"]["channels"]["hookload"]["column"] == column


def test_tables_given_are_named_and_the_rest_marked():
    known = Known("run", ("a.las",), tables={"survey": "s.csv", "mud": "m.csv", "weights": "w.csv"})
    text = write_skeleton(known)
    tree = tomllib.loads(text)
    assert tree["survey"]["file"] == "s.csv"
    assert tree["fluid"]["file"] == "m.csv"
    assert tree["records"]["weights"] == "w.csv"
    marked = [line for line in text.splitlines() if "FILL IN" in line]
    assert any(line.startswith('file = "hole.csv"') for line in marked)
    assert not any("s.csv" in line for line in marked)
