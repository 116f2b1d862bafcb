#!/bin/sh
# Fails unless the table of american_lattice.go is what it computes (some minutes).
# With an argument, writes it instead: american_check.sh write
set -eu
cd "$(dirname "$0")"
if [ "${1:-}" = write ]; then
	go run american_lattice.go | gzip -9n >american_options.csv.gz
else
	table=$(mktemp)
	trap 'rm -f "$table"' EXIT
	gzip -dc american_options.csv.gz >"$table"
	go run american_lattice.go | cmp - "$table"
fi
