#!/bin/sh
# Fails unless the reference tables are what their generator writes, and unless
# the compilers that may fuse a product with a sum (arm64, amd64 at level 3) do
# so in the closed forms only where the source says FMA.
set -eu
here=$(cd "$(dirname "$0")" && pwd)
fresh=$(mktemp -d)
trap 'rm -rf "$fresh"' EXIT
status=0

for level in "GOARCH=arm64" "GOARCH=amd64 GOAMD64=v3"; do
	env $level go build -C "$here/../../../model" -gcflags=-S . >"$fresh/assembly" 2>&1
	# FMADD, FMSUB, FNMADD, FNMSUB; VFMADD, VFNMADD, …
	grep -E 'V?FN?M(ADD|SUB)' "$fresh/assembly" | grep -oE '[^(]*\.go:[0-9]+' | sort -u >"$fresh/places"
	[ -s "$fresh/places" ] || { echo "$level: no fused operations at all: has the assembly changed its names?"; status=1; }
	while IFS=: read -r file line; do
		case $(basename "$file") in
		asian*.go | averaging.go | bachelier.go | barrier*.go | digital.go | divided.go | jet.go | lognormal.go | smooth.go | touch.go)
			sed -n "${line}p" "$file" | grep -q 'math\.FMA' || { echo "$level: fused without being told to: $file:$line"; status=1; }
			;;
		esac
	done <"$fresh/places"
done

/usr/bin/python3 -B "$here/closed_forms.py" "$fresh"
for table in "$fresh"/*.csv; do
	diff -u "$here/$(basename "$table")" "$table" || status=1
done
exit $status
