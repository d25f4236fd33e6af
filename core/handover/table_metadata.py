"""csv-metadata.json: what each column of the two tables means, by W3C Metadata Vocabulary for Tabular Data (2015),
with units as UCUM codes and, where there is one, the unit's name in QUDT."""

from __future__ import annotations

import json
from typing import Any

from core.handover.columns import READING_COLUMNS, RUN_COLUMNS, Column

CONTEXT = "http://www.w3.org/ns/csvw"
QUDT_UNIT = "http://qudt.org/vocab/unit/"

UNITS = {  # unit of a column -> UCUM code, name in QUDT
    "m": ("m", "M"),
    "s": ("s", "SEC"),
    "K": ("K", "K"),
    "°C": ("Cel", "DEG_C"),
    "kg": ("kg", "KiloGM"),
    "Pa": ("Pa", "PA"),
    "m/s": ("m/s", "M-PER-SEC"),
    "m³/s": ("m3/s", "M3-PER-SEC"),
    "kg/m³": ("kg/m3", "KiloGM-PER-M3"),
    "J/(kg·K)": ("J/(kg.K)", "J-PER-KiloGM-K"),
    "W/(m·K)": ("W/(m.K)", "W-PER-M-K"),
    "W/(m²·K)": ("W/(m2.K)", "W-PER-M2-K"),
    "W/K": ("W/K", "W-PER-K"),
    "": ("1", "UNITLESS"),
}


def _described(column: Column) -> dict[str, Any]:
    datatype: Any = "double" if column.datatype == "doubles" else column.datatype
    if datatype == "boolean":
        datatype = {"base": "boolean", "format": "true|false"}
    described: dict[str, Any] = {
        "name": column.name,
        "titles": column.name,
        "dc:description": column.meaning,
        "datatype": datatype,
        "required": column.needed,
    }
    if column.datatype == "doubles":
        described["separator"] = " "
    if column.datatype in ("double", "doubles"):
        ucum, qudt = UNITS[column.unit]
        described["http://qudt.org/schema/qudt/ucumCode"] = ucum
        described["http://qudt.org/schema/qudt/hasUnit"] = {"@id": QUDT_UNIT + qudt}
    return described


def metadata_text() -> str:
    """The metadata of an exported session; the same for every session."""
    runs = {
        "url": "runs.csv",
        "dc:title": "Runs: one row a run, with its set-up and its results",
        "dc:description": "A text that could start a formula in a spreadsheet has an apostrophe before it.",
        "tableSchema": {"columns": [_described(one) for one in RUN_COLUMNS], "primaryKey": "run"},
    }
    readings = {
        "url": "readings.csv",
        "dc:title": "Readings: one row a reading, with its run",
        "tableSchema": {
            "columns": [_described(one) for one in READING_COLUMNS],
            "primaryKey": ["run", "row"],
            "foreignKeys": [
                {"columnReference": "run", "reference": {"resource": "runs.csv", "columnReference": "run"}}
            ],
        },
    }
    group = {
        "@context": [CONTEXT, {"@language": "en"}],
        "dialect": {"encoding": "utf-8", "header": True, "delimiter": ",", "doubleQuote": True},
        "tables": [runs, readings],
    }
    return json.dumps(group, ensure_ascii=False, indent=1) + "\n"
