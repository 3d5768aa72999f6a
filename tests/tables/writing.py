"""Writes tables of invented liquids for the tests."""

from pathlib import Path

HEADER = "kind,name,field,law,value,unit,from [degC],to [degC],uncertainty [%],source,read"

LIQUID = [
    "liquid,test oil,title,,Test oil (invented),,,,,,",
    "liquid,test oil,synonym,,trial fluid,,,,,,",
    "liquid,test oil,density,polynomial,c0=910; c1=-0.65,kg/m**3,0,80,1,own measurement,no",
    "liquid,test oil,viscosity,vogel,A=0.05; B=900; T0=150,mPa*s,0,80,5,own measurement,no",
    "liquid,test oil,surface_tension,constant,32,mN/m,0,80,5,own measurement,no",
    'liquid,test oil,vapour_pressure_note,,"negligible, as measured",,,,,,',
    "liquid,test oil,flash_point,,210,degC,,,,own measurement,no",
    "liquid,test oil,hazard,,slippery: makes floors slippery.,,,,,,",
]


def write(folder: Path, rows: list[str], name: str = "own.csv", header: str = HEADER) -> Path:
    """Write a CSV table and return its path."""
    path = folder / name
    path.write_text("\n".join([header, *rows]) + "\n", encoding="utf-8")
    return path


def changed(of: str, **cells: str) -> list[str]:
    """Return the rows of the invented oil with cells of one field changed."""
    columns = [column.split(" ")[0] for column in HEADER.split(",")]
    rows = []
    for row in LIQUID:
        parts = row.split(",")
        if parts[2] == of:
            for column, cell in cells.items():
                parts[columns.index(column.rstrip("_"))] = cell
        rows.append(",".join(parts))
    return rows
