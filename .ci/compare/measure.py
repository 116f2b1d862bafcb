"""Times commands in turn: measure.py ROUNDS FOLDER NAME COMMAND [NAME COMMAND ...].

Each finds FOLDER empty, and nothing of the one before waiting to go to the disk. Prints the median seconds, CPU seconds and peak memory of each, and the ratios of
their seconds, round by round: median, smallest, largest.
"""

import os
import shutil
import subprocess
import sys
import time
from statistics import median

rounds, folder, pairs = int(sys.argv[1]), sys.argv[2], sys.argv[3:]
names, commands = pairs[::2], pairs[1::2]


def timed(command):
    """Seconds, CPU seconds and peak MiB of a shell command, children included."""
    shutil.rmtree(folder, ignore_errors=True)
    os.mkdir(folder)
    os.sync()
    with open(os.devnull, "wb") as null:
        start = time.monotonic()
        child = subprocess.Popen(["/bin/sh", "-c", "exec " + command], stdout=null, stderr=subprocess.PIPE)
        errors = child.stderr.read()
        _, status, usage = os.wait4(child.pid, 0)
        seconds = time.monotonic() - start
    if status:
        sys.exit(f"{command}: status {status}\n{errors.decode()}")
    return seconds, usage.ru_utime + usage.ru_stime, usage.ru_maxrss / 1024


runs = {name: [] for name in names}
for n in range(rounds):
    for name, command in zip(names, commands):
        runs[name].append(timed(command))
        print(f"round {n + 1}, {name}: {runs[name][-1][0]:.2f} s", file=sys.stderr)

print(f"{'':34} {'seconds':>8} {'CPU s':>8} {'MiB':>8}")
for name in names:
    print(f"{name:34} " + " ".join(f"{median(r[k] for r in runs[name]):8.2f}" for k in range(3)))
print()
for k, a in enumerate(names):
    for b in names[k + 1 :]:
        ratios = [y[0] / x[0] for x, y in zip(runs[a], runs[b])]
        print(f"{b} / {a}: {median(ratios):.2f} ({min(ratios):.2f} to {max(ratios):.2f})")
