#!/bin/sh
# Fails unless the committed tables are what their generators give. With an
# argument, writes them instead: check.sh write
set -eu
cd "$(dirname "$0")"
python=${PYTHON:-/usr/bin/python3}
status=0
for name in functions bsm; do
	if [ "${1:-}" = write ]; then
		"$python" $name.py | gzip -9n >$name.csv.gz
	else
		"$python" $name.py | { gzip -dc $name.csv.gz | cmp - /dev/fd/3; } 3<&0 || status=1
	fi
done
exit $status
