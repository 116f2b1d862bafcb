#!/bin/sh
# Fails if a stage of the AVX-512 form keeps a vector on the stack. The compiler
# does not align such slots, and a 64-byte value that crosses a cache line cannot
# be forwarded from its store to its load: one spill has been seen to cost a stage
# half of its speed. The remedy is to split the stage in two.
set -eu
cd "$(dirname "$0")/.."
listing=$(mktemp)
trap 'rm -f "$listing"' EXIT
GOARCH=amd64 GOEXPERIMENT=simd go build -gcflags=-S . 2>"$listing"
vectors=$(grep -cE 'bsm8_simd_amd64\.go.*Z[0-9]+' "$listing" || true)
if [ "$vectors" -lt 100 ]; then
	echo "only $vectors vector instructions seen: the listing was not understood"
	exit 1
fi
if grep -E 'VMOVDQU64[[:space:]].*\(SP\)' "$listing" | grep -E '(bsm8|lanes8)_simd_amd64\.go'; then
	exit 1
fi
