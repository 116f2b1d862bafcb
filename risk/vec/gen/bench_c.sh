#!/bin/sh
# Times BSM.Core against the same loop in C, on one core, in one run:
#
#     gen/bench_c.sh [rounds]
#
# Needs gcc, and glibc's vector maths for the vector rows. Every figure is the
# best of the rounds, which alternate, so that a busy moment of the machine does
# not fall on one side only. Ratios are to the fastest C row.
set -eu
rounds=${1:-3}
cd "$(dirname "$0")"
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
fast="-O3 -march=native -ffast-math"
gcc -O2 -o "$work/c-plain" cbench/core.c -lm
gcc $fast -mprefer-vector-width=256 -o "$work/c-256" cbench/core.c -lm
gcc $fast -mprefer-vector-width=512 -o "$work/c-512" cbench/core.c -lm
GOEXPERIMENT=simd go test -c -o "$work/go-bench" ..
round=0
while [ "$round" -lt "$rounds" ]; do
	for c in c-plain c-256 c-512; do
		echo "$c $(taskset -c 0 "$work/$c" 2>/dev/null)"
	done
	taskset -c 0 "$work/go-bench" -test.run '^$' -test.bench 'BSM|PlainLoop' -test.benchtime 0.3s |
		sed -nE 's/^Benchmark([^[:space:]]+)[[:space:]].* ([0-9.]+) best-ns\/opt.*/\1 \2/p' | sed -E 's/-[0-9]+ / /'
	round=$((round + 1))
done | awk '
	!($1 in best) { order[++n] = $1; best[$1] = $2 }
	$2 < best[$1] { best[$1] = $2 }
	END {
		label["c-plain"] = "C -O2"; label["c-256"] = "C -O3 -ffast-math, 256-bit vectors"; label["c-512"] = "C -O3 -ffast-math, 512-bit vectors"
		label["PlainLoop"] = "Go loop over package math"
		c = best["c-512"] < best["c-256"] ? best["c-512"] : best["c-256"]
		printf "%-38s %10s %8s\n", "", "ns/option", "ratio"
		for (i = 1; i <= n; i++) {
			name = order[i] in label ? label[order[i]] : "Go " order[i]
			printf "%-38s %10.2f %8.2f\n", name, best[order[i]], best[order[i]] / c
		}
	}'
