"""A small job with its catalogues, written to a folder, with parts of it replaced."""

from __future__ import annotations

from pathlib import Path

import pytest

from matchup.errors import InputError, Problem
from matchup.inputs import load_job
from matchup.model.job import Job

JOB = """\
title = "Hollowmere landing, invented"
[catalog]
hammers = "hammers.csv"
cushions = "cushions.csv"
[pile]
material = "concrete"
shape = "square"
width = "400 mm"
length = "24 m"
strength = "50 MPa"
prestress = "6 MPa"
[pile_cushion]
materials = ["plywood", "oak"]
sheets = { from = 4, to = 18 }
[[stages]]
name = "soft clay"
penetration = "10 m"
shaft = "500 kN"
toe = "300 kN"
[[stages]]
name = "final set"
penetration = "21 m"
shaft = "1100 kN"
toe = "750 kN"
shaft_shape = "triangular"
soil = "silty sand"
set = "4 mm"
[limits]
rule = "aashto"
"""
_COLUMNS = (
    "name,kind,ram_mass [t],stroke_min [m],stroke_max [m],efficiency [-],helmet_mass [kg],"
    "hammer_cushion,hammer_cushion_thickness [mm],hammer_cushion_area [cm2]"
)
HAMMERS = f"""\
{_COLUMNS}
Curlew,hydraulic,5,0.1,1.5,0.85,700,nylon,120,1500
Raven,drop,9,0.2,1.0,0.55,950,nylon,200,2000
"""
CUSHIONS = """\
name,use,modulus [MPa],restitution [-],sheet [mm]
plywood,pile,207,0.5,19
oak,pile,414,0.5,25
nylon,hammer,1300,0.92,
"""


def line_in(text: str, part: str) -> int:
    """The line, from 1, of the only place where `part` stands."""
    assert text.count(part) == 1, part
    return text[: text.index(part)].count("\n") + 1


def replaced(text: str, *pairs: tuple[str, str]) -> str:
    """`text` with the first occurrence of every pair's left side replaced."""
    for old, new in pairs:
        assert old in text, old
        text = text.replace(old, new, 1)
    return text


class Desk:
    """A folder that jobs are written to and read from; problems name the files in it."""

    def __init__(self, folder: Path):
        self.folder = folder

    def put(self, name: str, content: str | bytes) -> Path:
        path = self.folder / name
        data = content.encode() if isinstance(content, str) else content
        path.write_bytes(data)
        return path

    def load(
        self,
        job: str | bytes = JOB,
        hammers: str | bytes = HAMMERS,
        cushions: str | bytes = CUSHIONS,
    ) -> Job:
        self.put("hammers.csv", hammers)
        self.put("cushions.csv", cushions)
        return load_job(self.put("job.toml", job))

    def problems(self, *args: str | bytes, **kwargs: str | bytes) -> list[Problem]:
        with pytest.raises(InputError) as caught:
            self.load(*args, **kwargs)
        return list(caught.value.problems)

    def problem(self, *args: str | bytes, **kwargs: str | bytes) -> Problem:
        problems = self.problems(*args, **kwargs)
        assert len(problems) == 1, "\n".join(map(str, problems))
        return problems[0]


GROUND = """\
[ground]
layers = "layers.csv"
method = "api 2011"
start = "3 m"
every = "1 m"
cases = { low = 0.8, best = 1.0, high = 1.2 }
[target]
penetration = "21 m"
set = "4 mm"
"""
DRIVE = JOB[: JOB.index("[[stages]]")] + GROUND + JOB[JOB.index("[limits]") :]
LAYERS = """\
top [m],bottom [m],soil,unit_weight [kN/m3],density,strength [kPa],water [m]
0,8.2,clay,17,,30,1
8.2,25,sand,20,dense,,
"""
TABLE = """\
depth [m],shaft_best [kN],toe_best [kN],kind
0,0,50,driving
30,1000,900,
"""
CONE = "depth [m],cone resistance [MPa],sleeve friction [MPa]\n" + "".join(
    f"{0.1 * row:.1f},{5 + 0.04 * row:.2f},{0.05 + 0.0004 * row:.4f}\n" for row in range(1, 281)
)
"""A cone test of sand, from 0.1 m to 28 m; invented."""


class DriveDesk(Desk):
    """A desk whose jobs are whole drives, with the files of the ground beside them."""

    def drive(
        self,
        *pairs: tuple[str, str],
        layers: str = LAYERS,
        table: str = TABLE,
        cone: str | bytes = CONE,
    ) -> Job:
        """Load the drive with the first occurrence of every pair's left side replaced."""
        self.put("layers.csv", layers)
        self.put("table.csv", table)
        self.put("cone.csv", cone)
        return self.load(replaced(DRIVE, *pairs))

    def told(self, *pairs: tuple[str, str], **files: str) -> list[Problem]:
        """The problems of such a drive."""
        with pytest.raises(InputError) as caught:
            self.drive(*pairs, **files)
        return list(caught.value.problems)

    def one(self, *pairs: tuple[str, str], **files: str) -> Problem:
        """The only problem of such a drive."""
        problems = self.told(*pairs, **files)
        assert len(problems) == 1, "\n".join(map(str, problems))
        return problems[0]
