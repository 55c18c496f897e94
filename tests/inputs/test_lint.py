"""Checking files of all kinds at once, the schema of the job file, and the starter job.

That the starter job ranks is tested beside the command that writes it.
"""

from __future__ import annotations

import math
import re
import tomllib
from pathlib import Path

import pytest

from matchup.errors import InputError
from matchup.inputs import load_job
from matchup.inputs.lint import check_files
from matchup.inputs.schema import job_schema
from matchup.inputs.starter import starter_files
from tests.inputs.written import CONE, CUSHIONS, HAMMERS, JOB, LAYERS, TABLE, replaced

ROOT = Path(__file__).parents[2]
EXAMPLES = sorted((ROOT / "examples").glob("*/*.toml"))
CATALOGUES = sorted((ROOT / "catalogs_demo").glob("*.csv"))

# --- several files -------------------------------------------------------------------------------


def test_what_comes_along_is_sound_and_without_a_notice():
    sound, notices = check_files([*EXAMPLES, *CATALOGUES])
    kinds = [line.rpartition("sound ")[2] for line in sound]
    assert kinds == ["job"] * len(EXAMPLES) + ["cushion catalogue"] + ["hammer catalogue"] * 3
    assert notices == []


def test_files_of_the_ground_are_known_by_their_columns_or_how_they_begin(desk):
    ground = sorted((ROOT / "examples").glob("*/*.[cg]*[vf]"))
    sound, notices = check_files(ground)
    kinds = {line.rpartition("sound ")[2] for line in sound}
    assert kinds == {"table of layers", "table of resistance", "cone test"}
    assert notices == []
    desk.put("layers.csv", replaced(LAYERS, ("sand", "sant")))
    desk.put("table.csv", replaced(TABLE, ("30,1000", "-3,1000")))
    desk.put("cone.csv", replaced(CONE, ("5.04", "x")))
    desk.put("cone.gef", "#GEFID= 1, 1, 0\n#EOH=\n")
    names = ["layers.csv", "table.csv", "cone.csv", "cone.gef"]
    with pytest.raises(InputError) as caught:
        check_files([Path(name) for name in names])
    assert {problem.file for problem in caught.value.problems} == set(names)


def test_problems_of_all_files_come_in_the_order_of_the_files(desk):
    desk.put("job.toml", replaced(JOB, ('"24 m"', '"24"')))
    desk.put("hammers.csv", replaced(HAMMERS, ("0.85", "85")))
    desk.put("cushions.csv", replaced(CUSHIONS, ("414", "x")))
    desk.put("other.csv", "a,b\n1,2\n")
    names = ["other.csv", "hammers.csv", "job.toml", "none.csv", "cushions.csv"]
    with pytest.raises(InputError) as caught:
        check_files([Path(name) for name in names])
    # What a job says of its catalogues is not said twice.
    assert [(p.file, p.line) for p in caught.value.problems] == [
        ("other.csv", 1),
        ("hammers.csv", 2),
        ("job.toml", 9),
        ("none.csv", None),
        ("cushions.csv", 3),
    ]
    first = caught.value.problems[0]
    assert first.must == "must have the columns of a catalogue or of a file of the ground"
    assert (first.found, first.do) == ("a b", "Job files end in .toml.")


def test_names_of_hammer_cushions_are_checked_where_a_catalogue_is_among_the_files(desk):
    desk.put("h.csv", HAMMERS)
    desk.put("c.csv", replaced(CUSHIONS, ("nylon", "nylom")))
    sound, notices = check_files([Path("h.csv")])
    assert sound == ["h.csv: sound hammer catalogue"]
    assert notices == [
        "h.csv: names of hammer cushions not checked; give the cushion catalogue too"
    ]
    with pytest.raises(InputError) as caught:
        check_files([Path("h.csv"), Path("c.csv")])
    assert [p.line for p in caught.value.problems] == [2, 3]
    assert caught.value.problems[0].do == "Did you mean `nylom`?"


def test_a_table_that_can_not_be_read_is_told_once(desk):
    desk.put("h.csv", "\n")
    with pytest.raises(InputError) as caught:
        check_files([Path("h.csv"), Path("h.csv")])
    assert [p.found for p in caught.value.problems] == ["an empty table"]


# --- schema --------------------------------------------------------------------------------------

SCHEMA = job_schema()


def faults(value: object, schema: dict, where: str = "job") -> list[str]:
    """The parts of JSON Schema that the job's schema uses, checked by the letter."""
    if "$ref" in schema:
        schema = SCHEMA["$defs"][schema["$ref"].rpartition("/")[2]]
    assert set(schema) <= USED, set(schema) - USED
    for key in ("anyOf", "oneOf"):
        forms = [form for form in schema.get(key, []) if form.get("type") != "null"]
        if len(forms) == 1:
            return faults(value, forms[0], where)
        if forms:
            fits = sum(faults(value, form, where) == [] for form in forms)
            return [] if fits == 1 or (fits and key == "anyOf") else [f"{where} fits no form"]
    if "enum" in schema and value not in schema["enum"]:
        return [f"{where} is none of {schema['enum']}"]
    kind = schema.get("type")
    if kind and (not isinstance(value, TYPES[kind]) or (value is True and kind != "boolean")):
        return [f"{where} is no {kind}"]
    if kind == "number":
        low, high = schema.get("exclusiveMinimum", -math.inf), schema.get("maximum", math.inf)
        return [] if low < value <= high else [f"{where} is out of range"]
    if kind == "object":
        return table_faults(value, schema, where)
    if kind == "array":
        items = schema.get("prefixItems") or [schema["items"]] * len(value)
        pairs = enumerate(zip(value, items, strict=True))
        return [fault for i, (one, item) in pairs for fault in faults(one, item, f"{where}[{i}]")]
    return []


def table_faults(value: dict, schema: dict, where: str) -> list[str]:
    if "properties" not in schema:  # keys of the user's own, as the names of ground cases
        of_all = schema["additionalProperties"]
        return [f for key, one in value.items() for f in faults(one, of_all, f"{where}.{key}")]
    known = schema["properties"]
    assert schema["additionalProperties"] is False
    found = [f"{where}.{key} is unknown" for key in value if key not in known]
    found += [f"{where}.{key} is missing" for key in schema.get("required", []) if key not in value]
    for key in set(value) & set(known):
        found += faults(value[key], known[key], f"{where}.{key}")
    return found


TYPES = {
    "string": str,
    "number": (int, float),
    "integer": int,
    "boolean": bool,
    "object": dict,
    "array": list,
    "null": type(None),
}
USED = {
    *("$schema", "$defs", "$ref", "title", "description", "default", "type", "enum", "const"),
    *("properties", "required", "additionalProperties", "items", "prefixItems", "anyOf", "oneOf"),
    *("minItems", "maxItems", "minimum", "maximum", "exclusiveMinimum"),
}


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.stem)
def test_the_schema_accepts_the_examples(path):
    assert faults(tomllib.loads(path.read_text("utf-8")), SCHEMA) == []


def test_the_schema_accepts_the_starter_with_everything_that_is_commented_out():
    text = starter_files()["job.toml"]
    assert faults(tomllib.loads(text), SCHEMA) == []
    assert faults(tomllib.loads(uncommented(text)), SCHEMA) == []


def uncommented(text: str) -> str:
    """The starter with its optional keys and tables in force."""
    return re.sub(r"(?m)^# (?=\[[a-z_]+\]|[a-z_]+ = )", "", text)


@pytest.mark.parametrize(
    ("old", "new", "fault"),
    [
        ('material = "concrete"', 'material = "stone"', "job.pile.material is none of"),
        ('length = "24 m"', "length = 24", "job.pile.length is no string"),
        ('penetration = "21 m"', "", "job.stages[1].penetration is missing"),
        ('length = "24 m"', 'length = "24 m"\nlenght = "24 m"', "job.pile.lenght is unknown"),
        ('rule = "aashto"', 'rule = "x"', "job.limits.rule is none of"),
        ('rule = "aashto"', "tension = 85", "job.limits.tension is out of range"),
        ("sheets = { from = 4, to = 18 }", 'sheets = "4"', "job.pile_cushion.sheets fits no form"),
        ('"triangular"', "[1]", "job.stages[1].shaft_shape fits no form"),
    ],
)
def test_the_schema_refuses_what_the_reader_refuses(old, new, fault):
    [found] = faults(tomllib.loads(replaced(JOB, (old, new))), SCHEMA)
    assert found.startswith(fault)


def test_the_schema_says_what_units_a_key_takes():
    stage = SCHEMA["$defs"]["StageKeys"]["properties"]
    assert stage["penetration"] == {
        "description": "length with its unit (m or ft), above 0",
        "title": "Penetration",
        "type": "string",
    }
    for one in (*stage.values(), *SCHEMA["$defs"]["PileKeys"]["properties"].values()):
        assert {"title", "$ref", "description", "anyOf"} & set(one)


# --- starter -------------------------------------------------------------------------------------


def put_starter(folder: Path) -> Path:
    for name, text in starter_files().items():
        (folder / name).write_text(text, encoding="utf-8")
    return folder / "job.toml"


def test_the_starter_is_sound_and_without_a_notice(tmp_path):
    job = load_job(put_starter(tmp_path))
    assert job.notices == ()
    assert len(job.hammers) == 19


def test_every_option_of_the_starter_can_be_put_in_force(tmp_path):
    path = put_starter(tmp_path)
    text = uncommented(path.read_text("utf-8"))
    # Stress limits may be given in one way only.
    text = re.sub(r"(?m)^(compression|tension) = .*$", "", text)
    path.write_text(text)
    job = load_job(path)
    assert len(job.hammer_cushions) == 6
    assert job.limits.compression == 0.9 * 28e6
    assert job.pile.toe.modulus == 34e9
    assert [part.name for part in job.pile.column] == ["follower", "upper", "lower"]
    assert [notice.rpartition(": ")[2] for notice in job.notices] == [
        "both limits are given",
        "`shaft_damping` is given",
        "`toe_quake` is given",
        "every hammer's row names its helmet",
    ]


def test_the_starter_names_every_key():
    text = starter_files()["job.toml"] + starter_files()["drive.toml"]
    for model in SCHEMA["$defs"].values():
        for key in model["properties"]:
            assert re.search(rf"\b{key}\b", text), key
