"""Small cone tests of an invented site, true to each open format, for changing and breaking."""

from __future__ import annotations

from pathlib import Path

from matchup.errors import Problem
from matchup.inputs.findings import Findings
from matchup.inputs.sounding import read_sounding
from matchup.model.sounding import Sounding

GEF = """\
#GEFID= 1, 1, 0
#COLUMN= 6
#COLUMNINFO= 1, m, penetration length, 1
#COLUMNINFO= 2, MPa, qc, 2
#COLUMNINFO= 3, MPa, fs, 3
#COLUMNINFO= 4, kPa, pore pressure, 6
#COLUMNINFO= 5, degrees, inclination, 8
#COLUMNINFO= 6, m, corrected depth, 11
#COLUMNVOID= 2, -9999.0
#COLUMNVOID= 3, -9999.0
#COLUMNVOID= 4, -8888.0
#COLUMNSEPARATOR= ;
#RECORDSEPARATOR= !
#LASTSCAN= 5
#COMMENT= Hollowmere, an invented site
#TESTID= B7
#ZID= 00000, 3.40
#MEASUREMENTVAR= 3, 0.80, -, net area ratio
#MEASUREMENTVAR= 13, 0.50, m, pre-excavated depth
#MEASUREMENTVAR= 16, 2.50, m, final length
#REPORTCODE= GEF-CPT-Report, 1, 1, 2, -
#EOH=
0.50; 0.40;-9999.0;-8888.0;1.0;0.500;!
1.00; 0.50;0.015;12.0;1.0;0.999;!
1.50; 0.60;0.016;15.0;1.0;1.498;!
2.00; 6.00;0.040;20.0;1.0;1.997;!
2.50;12.00;-9999.0;-8888.0;1.0;2.496;!
"""
"""Five rows; the void of pore pressure is another number than that of qc and fs."""

AGS = """\
"GROUP","PROJ"
"HEADING","PROJ_ID","PROJ_NAME"
"UNIT","",""
"TYPE","ID","X"
"DATA","HM","Hollowmere, an ""invented"" site"

"GROUP","LOCA"
"HEADING","LOCA_ID","LOCA_TYPE","LOCA_FDEP"
"UNIT","","","m"
"TYPE","ID","PA","2DP"
"DATA","B7","SCP","2.00"
"DATA","B8","SCP","1.50"

"GROUP","SCPG"
"HEADING","LOCA_ID","SCPG_TESN","SCPG_TYPE","SCPG_WAT","SCPG_CAR"
"UNIT","","","","m",""
"TYPE","ID","X","PA","2DP","2DP"
"DATA","B7","1","PC","","0.80"
"DATA","B8","1","PC","1.20","0.75"
"DATA","B8","2","PC","","0.75"

"GROUP","SCPT"
"HEADING","LOCA_ID","SCPG_TESN","SCPT_DPTH","SCPT_RES","SCPT_FRES","SCPT_PWP2","SCPT_FRR"
"UNIT","","","m","MN/m2","kN/m2","kN/m2","%"
"TYPE","ID","X","2DP","3DP","3DP","1DP","2DP"
"DATA","B7","1","0.50","0.400","","",""
"DATA","B7","1","1.00","0.500","15.000","12.0","3.00"
"DATA","B7","1","2.00","12.000","","",""
"DATA","B8","1","0.50","1.000","8.000","",""
"DATA","B8","1","1.00","2.000","9.000","",""
"DATA","B8","2","1.00","4.000","","",""
"DATA","B8","2","1.50","6.000","","",""
"""

_EMPTY = ["-999999"] * 25


def bro_record(length: str, depth: str, tip: str, sleeve: str, pore_pressure: str) -> str:
    """A record of 25 values, all void but those given."""
    cells = list(_EMPTY)
    cells[0], cells[1], cells[3], cells[18], cells[22] = length, depth, tip, sleeve, pore_pressure
    return ",".join(cells)


VOID = "-999999"
BRO_FIELDS = [
    "penetrationLength",
    "depth",
    "elapsedTime",
    "coneResistance",
    "correctedConeResistance",
    "netConeResistance",
    "magneticFieldStrengthX",
    "magneticFieldStrengthY",
    "magneticFieldStrengthZ",
    "magneticFieldStrengthTotal",
    "electricalConductivity",
    "inclinationEW",
    "inclinationNS",
    "inclinationX",
    "inclinationY",
    "inclinationResultant",
    "magneticInclination",
    "magneticDeclination",
    "localFriction",
    "poreRatio",
    "temperature",
    "porePressureU1",
    "porePressureU2",
    "porePressureU3",
    "frictionRatio",
]
BRO_GIVEN = {"penetrationLength", "depth", "coneResistance", "localFriction", "porePressureU2"}
BRO_RECORDS = [
    bro_record("0.500", "0.500", "0.400", VOID, VOID),
    bro_record("2.000", "1.997", "6.000", "0.040", "0.020"),
    bro_record("1.000", "0.999", "0.500", "0.015", "0.012"),
    bro_record("2.500", "2.496", "12.000", VOID, VOID),
]
"""Out of depth order on purpose."""
BRO = f"""\
<?xml version="1.0" encoding="UTF-8"?>
<dispatchDataResponse xmlns="http://www.broservices.nl/xsd/dscpt/1.1"
    xmlns:brocom="http://www.broservices.nl/xsd/brocommon/3.0"
    xmlns:cptcommon="http://www.broservices.nl/xsd/cptcommon/1.1"
    xmlns:swe="http://www.opengis.net/swe/2.0">
  <!-- Hollowmere, an invented site -->
  <dispatchDocument>
    <CPT_O>
      <brocom:broId>CPT000000000000</brocom:broId>
      <deliveredVerticalPosition>
        <cptcommon:localVerticalReferencePoint>maaiveld</cptcommon:localVerticalReferencePoint>
        <cptcommon:offset uom="m">3.400</cptcommon:offset>
        <cptcommon:verticalDatum>NAP</cptcommon:verticalDatum>
      </deliveredVerticalPosition>
      <conePenetrometerSurvey>
        <cptcommon:trajectory>
          <cptcommon:predrilledDepth uom="m">0.50</cptcommon:predrilledDepth>
          <cptcommon:finalDepth uom="m">2.500</cptcommon:finalDepth>
        </cptcommon:trajectory>
        <cptcommon:conePenetrometer>
          <cptcommon:coneSurfaceQuotient uom="1">0.80</cptcommon:coneSurfaceQuotient>
        </cptcommon:conePenetrometer>
        <cptcommon:conePenetrationTest>
          <cptcommon:cptResult>
            <swe:encoding>
              <swe:TextEncoding decimalSeparator="." tokenSeparator="," blockSeparator=";"/>
            </swe:encoding>
            <cptcommon:values>{";".join(BRO_RECORDS)};</cptcommon:values>
          </cptcommon:cptResult>
        </cptcommon:conePenetrationTest>
        <cptcommon:dissipationTest>
          <cptcommon:disResult>
            <cptcommon:values>1.0,0.1,-999999,0.02,-999999;</cptcommon:values>
          </cptcommon:disResult>
        </cptcommon:dissipationTest>
        <cptcommon:parameters>
          {
    "".join(
        f"<cptcommon:{name}>{'ja' if name in BRO_GIVEN else 'nee'}</cptcommon:{name}>"
        for name in BRO_FIELDS
    )
}
        </cptcommon:parameters>
      </conePenetrometerSurvey>
    </CPT_O>
  </dispatchDocument>
</dispatchDataResponse>
"""
BOREHOLE = """\
<?xml version="1.0" encoding="UTF-8"?>
<dispatchDataResponse xmlns="http://www.broservices.nl/xsd/dsbhr-gt/2.1">
  <dispatchDocument><BHR_GT_O><boreholeSampleDescription/></BHR_GT_O></dispatchDocument>
</dispatchDataResponse>
"""

CSV = """\
depth [m],qc [MPa],fs [kPa],u2 [kPa],area_ratio,predrilled [m],water [m],Rf [%]
0.5,0.4,,,0.8,0.5,1.2,
1.0,0.5,15,12,,,,3.0
2.5,12,,,,,,
"""


def changed(text: str, *pairs: tuple[str, str]) -> str:
    """Return a text with each first part put in place of, or the test's premise is wrong."""
    for old, new in pairs:
        assert old in text, f"{old!r} is not in the file that the test wants to change"
        text = text.replace(old, new)
    return text


def read(
    folder: Path, text: str | bytes, name: str = "b7.txt", location: str | None = None
) -> tuple[Sounding | None, list[Problem]]:
    """Write a file, read it, and hold what must always be so."""
    path = folder / name
    path.write_bytes(text if isinstance(text, bytes) else text.encode("utf-8"))
    findings = Findings()
    sounding = read_sounding(path, findings, location)
    assert (sounding is None) == bool(findings.problems)
    assert all(problem.file == str(path) and problem.must for problem in findings.problems)
    return sounding, findings.problems


def good(folder: Path, text: str | bytes, location: str | None = None) -> Sounding:
    """Return the sounding of a file that must be readable."""
    sounding, problems = read(folder, text, location=location)
    assert sounding is not None, "\n".join(map(str, problems))
    return sounding


def bad(folder: Path, text: str | bytes, location: str | None = None) -> list[Problem]:
    """Return the problems of a file that must not be readable."""
    return read(folder, text, location=location)[1]


def only(problems):
    """Return the one problem; all of them in the message if there are more."""
    assert len(problems) == 1, "\n".join(map(str, problems))
    return problems[0]


def told(problems):
    return {(p.line, p.place, p.must, p.found) for p in problems}
