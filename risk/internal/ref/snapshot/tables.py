"""Reads the tables of a snapshot folder, from the text of the design alone.

Numbers become mpmath numbers straight from their decimal text, so that no
rounding to a double stands between the file and the reference.
"""

import csv
import datetime
import gzip
import io
import re
import tomllib
from pathlib import Path

from mpmath import mpf


class Refused(Exception):
    """A row that must not be priced: one of the reject codes."""


class Moment:
    """A date, with minutes after midnight where a time of day was given."""

    def __init__(self, day, minute=None):
        self.day, self.minute = day, minute

    def years_to(self, other):
        """Years of 365 days: whole days unless both sides carry a time of day."""
        days = (other.day - self.day).days
        if self.minute is None or other.minute is None:
            return mpf(days) / 365
        return mpf(days * 1440 + other.minute - self.minute) / (365 * 1440)


class Folder:
    """A snapshot folder and how its house writes."""

    def __init__(self, path):
        self.path = Path(path)
        self.run = tomllib.loads((self.path / "run.toml").read_text(encoding="utf-8"))
        style = self.run.get("csv", {})
        self.delimiter = style.get("delimiter", ",")
        self.comma = style.get("decimal_comma", False)
        self.encoding = style.get("encoding", "utf-8")
        self.date_format = style.get("date_format", "YYYY-MM-DD")
        self.percent = self.run.get("vols", {}).get("unit", "decimal") == "percent"
        self.as_of = self._moment(self.run["as_of"], "YYYY-MM-DD")

    def has(self, table):
        return (self.path / f"{table}.csv").exists() or (self.path / f"{table}.csv.gz").exists()

    def rows(self, table):
        """Yields each row as a dict under our own column names; None for a
        row that does not have the columns of its header."""
        plain, packed = self.path / f"{table}.csv", self.path / f"{table}.csv.gz"
        data = gzip.decompress(packed.read_bytes()) if packed.exists() else plain.read_bytes()
        names = {theirs.lower(): ours for ours, theirs in self.run.get("columns", {}).get(table, {}).items()}
        reader = csv.reader(io.StringIO(data.decode(self.encoding), newline=""), delimiter=self.delimiter)
        header = [names.get(h.lower(), h.lower()) for h in next(reader)]
        for cells in reader:
            row = dict(zip(header, cells))
            row["whole"] = len(cells) == len(header)
            yield row

    def number(self, text):
        """A finite number, None for an empty cell."""
        if not text:
            return None
        pattern = r"[+-]?\d+(,\d+)?" if self.comma else r"[+-]?\d+(\.\d+)?"
        if not re.fullmatch(pattern, text):
            raise Refused("bad_number")
        return mpf(text.replace(",", "."))

    def vol(self, text):
        v = self.number(text)
        return v / 100 if v is not None and self.percent else v

    def moment(self, text):
        """A date or date-time of the house's format, None for an empty cell."""
        return self._moment(text, self.date_format) if text else None

    def day(self, text):
        return self.moment(text).day

    def _moment(self, text, layout):
        pattern = re.escape(layout)
        for letters in ("YYYY", "MM", "DD"):
            pattern = pattern.replace(letters, rf"(?P<{letters}>\d{{{len(letters)}}})")
        m = re.fullmatch(pattern + r"(?:[T ](?P<h>\d\d):(?P<m>\d\d))?", text)
        try:
            day = datetime.date(int(m["YYYY"]), int(m["MM"]), int(m["DD"]))
        except (TypeError, ValueError):
            raise Refused("bad_date")
        if m["h"] is None:
            return Moment(day)
        return Moment(day, int(m["h"]) * 60 + int(m["m"]))


def add_tenor(day, tenor):
    """as_of plus 10D, 2W, 3M or 5Y; a month that is too short ends earlier."""
    n, unit = int(tenor[:-1]), tenor[-1].upper()
    if unit in "DW":
        return day + datetime.timedelta(days=n * (7 if unit == "W" else 1))
    months = day.year * 12 + day.month - 1 + n * (12 if unit == "Y" else 1)
    year, month = divmod(months, 12)
    for last in range(day.day, 0, -1):
        try:
            return datetime.date(year, month + 1, last)
        except ValueError:
            continue
