"""Reads a table of a run as a user would: with units through astropy, and plainly through pandas.

Usage: python3 .ci/read_ecsv.py TABLE.ecsv
Ends with 1 and one line of reason when a unit is unknown, a datatype is not as declared, or the two readers differ.
"""

import sys

import numpy
import pandas
from astropy.table import Table
from astropy.units import UnrecognizedUnit


def main(path):
    table = Table.read(path, format="ascii.ecsv")
    frame = pandas.read_csv(path, comment="#")
    if len(table) == 0:
        sys.exit(f"{path}: no rows, nothing was checked")
    if list(table.colnames) != list(frame.columns):
        sys.exit(f"{path}: the two readers see different columns")
    if len(table) != len(frame):
        sys.exit(f"{path}: {len(table)} rows against {len(frame)}")
    for name in table.colnames:
        column = table[name]
        if isinstance(column.unit, UnrecognizedUnit):
            sys.exit(f"{path}: column {name}: unit {column.unit} is not known")
        masked = numpy.array(getattr(column, "mask", numpy.zeros(len(table), bool)))
        masked = numpy.broadcast_to(masked, (len(table),))
        if not (masked == frame[name].isna().to_numpy()).all():
            sys.exit(f"{path}: column {name}: the readers disagree on what is absent")
        if column.dtype.kind == "f":
            mine, theirs = numpy.array(column)[~masked], frame[name].to_numpy()[~masked]
            if not numpy.allclose(mine, theirs.astype(float), rtol=1e-15, atol=0.0):
                sys.exit(f"{path}: column {name}: the readers see different numbers")
        print(f"{name}: {column.dtype}, unit {column.unit}, {int(masked.sum())} absent")


main(sys.argv[1])
