"""Lines and texts of keys: the odd corners of TOML; random documents are in the fuzz."""

from __future__ import annotations

import tomllib

from matchup.inputs.toml_lines import key_spots, spot_of

DOCUMENT = '''\
title = "a # b"  # a comment with = and [
"odd key".'b.c' = 1
[pile] # x
  width = '400 mm'
drawn = 1979-05-27 07:32:00
note = """
[no.table]
width = "no" \\""" """""
raw = \'\'\'
# no comment
x = 1\'\'\'

[ a . "b c" ]
list = [
  "one", # the first ]
  { from = 4, to = [5, 6] },

  []
]
[[stages]]
name = "one"
[stages.deep]
x = 1
[[stages]]
name = "two"
[[stages.parts]]
y = 2
[[stages.parts]]
y = 3
'''


def test_every_key_has_its_line_and_its_value_as_typed():
    spots = key_spots(DOCUMENT)
    lines = {path: spot.line for path, spot in spots.items()}
    typed = {path: spot.typed for path, spot in spots.items()}
    assert lines["title",] == 1
    assert typed["title",] == '"a # b"'
    assert lines["odd key", "b.c"] == 2
    assert typed["pile",] == "[pile]"
    assert typed["pile", "width"] == "'400 mm'"
    assert typed["pile", "drawn"] == "1979-05-27 07:32:00"
    assert lines["pile", "note"] == 6
    assert lines["pile", "raw"] == 9
    assert ("no",) not in spots
    assert lines["a", "b c"] == 13
    assert lines["a", "b c", "list"] == 14
    assert typed["a", "b c", "list"] == '[ "one", { from = 4, to = [5, 6] }, [] ]'
    assert lines["a", "b c", "list", 0] == 15
    assert lines["a", "b c", "list", 1, "to", 1] == 16
    assert typed["a", "b c", "list", 1, "to"] == "[5, 6]"
    assert lines["a", "b c", "list", 2] == 18
    assert lines["stages",] == lines["stages", 0] == 20
    assert lines["stages", 0, "deep", "x"] == 23
    assert lines["stages", 1, "name"] == 25
    assert lines["stages", 1, "parts", 1, "y"] == 29
    assert typed["stages", 1, "parts"] == "[[stages.parts]]"


def test_every_spot_is_in_the_document_and_no_key_is_left_out():
    data = tomllib.loads(DOCUMENT)

    def paths(item, path=()):
        if path:
            yield path
        pairs = item.items() if isinstance(item, dict) else ()
        pairs = enumerate(item) if isinstance(item, list) else pairs
        for key, one in pairs:
            yield from paths(one, (*path, key))

    spots = key_spots(DOCUMENT)
    known = set(paths(data))
    assert set(spots) <= known
    # Tables that no line of their own opens have the line of what they hold.
    assert known - set(spots) == {("odd key",), ("a",)}


def test_what_is_not_there_has_the_spot_of_what_would_hold_it():
    spots = key_spots(DOCUMENT)
    assert spot_of(spots, ("pile", "length")).line == 3
    assert spot_of(spots, ("stages", 1, "toe")).line == 24
    assert spot_of(spots, ("limits",)) is None


def test_long_values_are_cut():
    spots = key_spots(f"x = [{', '.join(['1'] * 50)}]\n")
    assert len(spots["x",].typed) == 60
    assert spots["x",].typed.endswith("...")


def test_lines_end_at_line_feeds_alone():
    assert key_spots("# a\u2028b\x85c\r\nx = 1\r\n")["x",].line == 2
