#!/bin/sh
# Fails unless the committed tables are what their generators give. With an
# argument, writes them instead: check.sh write
set -eu
cd "$(dirname "$0")"
python=${PYTHON:-/usr/bin/python3}
fresh=$(mktemp)
trap 'rm -f "$fresh"' EXIT
status=0
for name in functions bsm implied; do
	"$python" $name.py >"$fresh"
	if [ "${1:-}" = write ]; then
		gzip -9n <"$fresh" >$name.csv.gz
	elif ! gzip -dc $name.csv.gz | cmp - "$fresh"; then
		echo "$name.csv.gz is not what $name.py gives"
		status=1
	fi
done
exit $status
