#!/usr/bin/env bash
# Fails unless the expected lines are what the reference program says of the
# committed samples, to the byte, and the lattice's prices what it computes (half a
# minute on two processors). With an argument, writes them instead: check.sh write
set -euo pipefail
cd "$(dirname "$0")"
/usr/bin/python3 -B -m unittest -q test_price.py
fresh=$(mktemp -d)
trap 'rm -rf "$fresh"' EXIT
status=0
keep() { # fresh file, committed file
	if [ "${write:-}" ]; then
		cp "$1" "$2"
	elif ! cmp "$1" "$2"; then
		echo "$2 is not what its program gives"
		status=1
	fi
}
write=${1:-}
for sample in ../../../../samples/*/run.toml; do
	sample=$(dirname "$sample")
	name=$(basename "$sample")
	/usr/bin/python3 -B expected.py --options "$sample" >"$fresh/options.csv"
	if [ "$(wc -l <"$fresh/options.csv")" -gt 1 ]; then
		(cd .. && go run pde_lines.go pde_lattice.go) <"$fresh/options.csv" >"$fresh/lattice.csv"
		keep "$fresh/lattice.csv" "lattice/$name.csv"
	fi
	/usr/bin/python3 -B expected.py "$sample" >"$fresh/expected.csv"
	keep "$fresh/expected.csv" "$name.csv"
done
exit $status
