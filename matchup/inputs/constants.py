"""Values of a whole table that stand in a column of their own, as people keep them in a sheet."""

from __future__ import annotations

from collections.abc import Sequence

from matchup.inputs.columns import Record
from matchup.inputs.findings import Findings


def constant_of(
    file: str, records: Sequence[Record], column: str, findings: Findings
) -> Record | None:
    """Return the first row that has a value in a column; None where no row has.

    One value is enough; where there are more, they must be the same, and those that are not go
    to `findings`.
    """
    given = [record for record in records if column in record.values]
    for record in given[1:]:
        if record.values[column] != given[0].values[column]:
            first = given[0]
            must = f"must be the same in every row; line {first.line} has {first.typed[column]}"
            findings.add(file, record.line, f"`{column}`", must, record.typed[column])
    return given[0] if given else None
