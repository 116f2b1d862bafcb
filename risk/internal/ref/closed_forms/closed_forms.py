"""Writes the reference tables of the closed-form models into a folder.

usage: closed_forms.py FOLDER [TABLE...]

Inputs are float64 numbers printed in full, results 17 digits of 50.
"""

import csv
import os
import random
import sys

from mpmath import mpf, nstr

from asian import ASIAN_INPUTS, MOMENT_INPUTS, MOMENT_RESULTS, asian_lines, asian_values, moment_lines, moment_values
from barrier import BARRIER_INPUTS, TOUCH_INPUTS, TOUCH_RESULTS, barrier_lines, barrier_values, touch_lines, touch_values
from digital import DIGITAL_INPUTS, NORMAL_INPUTS, digital_lines, digital_values, normal_lines, normal_values
from numeric import GREEKS

# name: inputs, results, lines of inputs, results of a line
TABLES = {
    "touch": (TOUCH_INPUTS, TOUCH_RESULTS, touch_lines, touch_values),
    "digital": (DIGITAL_INPUTS, GREEKS, digital_lines, digital_values),
    "barrier": (BARRIER_INPUTS, GREEKS, barrier_lines, barrier_values),
    "moments": (MOMENT_INPUTS, MOMENT_RESULTS, moment_lines, moment_values),
    "asian": (ASIAN_INPUTS, GREEKS, asian_lines, asian_values),
    "bachelier": (NORMAL_INPUTS, GREEKS, normal_lines, normal_values),
}


def show(x):
    if isinstance(x, str):
        return x
    if isinstance(x, mpf):
        return nstr(x, 17, min_fixed=-5, max_fixed=17)
    return repr(float(x))


def main():
    folder, names = sys.argv[1], sys.argv[2:] or TABLES
    for name in names:
        inputs, results, lines, values = TABLES[name]
        with open(os.path.join(folder, name + ".csv"), "w", newline="") as f:
            out = csv.writer(f, lineterminator="\n")
            out.writerow(inputs + results)
            for line in lines(random.Random(name)):
                out.writerow([show(x) for x in line + values(line)])


main()
