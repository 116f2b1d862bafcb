#!/bin/sh
# Fails unless the table of pde_table.go is what it computes (some minutes).
# With an argument, writes it instead: pde_check.sh write
set -eu
cd "$(dirname "$0")"
if [ "${1:-}" = write ]; then
	go run pde_table.go pde_lattice.go | gzip -9n >pde_options.csv.gz
else
	gzip -dc pde_options.csv.gz >"${TMPDIR:-/tmp}/pde_options.$$"
	trap 'rm -f "${TMPDIR:-/tmp}/pde_options.$$"' EXIT
	go run pde_table.go pde_lattice.go | cmp - "${TMPDIR:-/tmp}/pde_options.$$"
fi
