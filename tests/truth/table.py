"""How rows of truth are written, read and compared.

A table is a CSV file: lines that open with `# ` say source, library versions, date made, units, tolerance
and why; then one line of column names; then the rows. An empty field means that the quantity does not
exist, or that two fair definitions of it disagree there. Fields never hold a comma.
"""

import csv
import datetime
import io
import math
from importlib.metadata import version


def versions(*names):
    """Names and versions of installed libraries, for a header."""
    return ", ".join(f"{name} {version(name)}" for name in names)


def write(path, header, columns, rows):
    """Writes the table `rows` (lists in the order of `columns`) under `header` (lines of text)."""
    with open(path, "w", newline="\n") as out:
        for line in header:
            out.write(f"# {line}\n")
        out.write(f"# Made: {datetime.date.today().isoformat()}\n")
        out.write(",".join(columns) + "\n")
        for row in rows:
            fields = [field(value) for value in row]
            assert len(fields) == len(columns), (len(fields), columns)
            assert not any("," in text for text in fields), fields
            out.write(",".join(fields) + "\n")


def field(value):
    """A value as text: floats so that they read back as the same double, None as an empty field."""
    if value is None:
        return ""
    if isinstance(value, float):
        return repr(float(value))
    return str(value)


def read(path):
    """The rows of a table as dictionaries of text."""
    with open(path) as source:
        text = "".join(line for line in source if not line.startswith("#"))
    return list(csv.DictReader(io.StringIO(text)))


def differences(committed, made, relative, absolute):
    """What differs between two tables, as sentences: text exactly, numbers beyond the two tolerances.

    `absolute` is a number, or a dictionary by column with the key "" for all others.
    """
    found = []
    old, new = read(committed), read(made)
    if len(old) != len(new):
        return [f"{len(old)} rows are committed, {len(new)} were made"]
    for number, (a, b) in enumerate(zip(old, new), 1):
        if a.keys() != b.keys():
            return [f"columns differ: {sorted(a.keys() ^ b.keys())}"]
        for key in a:
            try:
                x, y = float(a[key]), float(b[key])
            except ValueError:
                if a[key] != b[key]:
                    found.append(f"row {number}, {key}: {a[key]!r} is committed, {b[key]!r} was made")
                continue
            limit = absolute if not isinstance(absolute, dict) else absolute.get(key, absolute[""])
            if not abs(x - y) <= max(limit, relative * max(abs(x), abs(y))) and not (math.isnan(x) and math.isnan(y)):
                found.append(f"row {number}, {key}: {a[key]} is committed, {b[key]} was made")
    return found
