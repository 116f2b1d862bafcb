#!/bin/sh
# Fails if a stage of the AVX-512 form keeps a vector on the stack. The compiler
# does not align such slots, and a 64-byte value that crosses a cache line cannot
# be forwarded from its store to its load: one spill has been seen to cost a stage
# half of its speed. The remedy is to split the stage in two.
set -eu
cd "$(dirname "$0")/.."
GOARCH=amd64 GOEXPERIMENT=simd go build -gcflags=-S . 2>&1 | awk '
	/ STEXT / {
		stage = $1 ~ /\.(outside|discounted|drifted|distances|density|tail|core|further|tails)8$/ ||
			$1 ~ /quoteScratch8\)\.(start|arguments|rising|series|residuals|steps|advance|finish)$/
		stages += stage
		name = $1
	}
	stage && /[^A-Z]Z[0-9]+/ { vectors++ }
	stage && /VMOVDQU64.*\(SP\)/ { print name ": " $0; spilled = 1 }
	END {
		if (stages != 17 || vectors < 400) {
			print stages " stages and " vectors " vector instructions seen: the listing was not understood"
			exit 1
		}
		exit spilled
	}'
