#!/bin/sh
# Fails if the compiler fuses a product and a sum that the source does not fuse:
# every such instruction must stand on a line that calls math.FMA or fma. Read off
# the machine code for arm64, the target that fuses most readily, so that the
# promise of equal bits can be checked without such a machine.
set -eu
cd "$(dirname "$0")"
GOARCH=arm64 GOEXPERIMENT= go build -gcflags=-S . 2>&1 |
	sed -nE 's/.*\(.*\/pde\/([a-z0-9_]+\.go):([0-9]+)\)[[:space:]]+(FN?M(ADD|SUB)D).*/\1 \2 \3/p' | sort -u |
	{
		count=0 status=0
		while read -r file line instruction; do
			count=$((count + 1))
			if ! sed -n "${line}p" "$file" | grep -Eq 'math\.FMA|fma\('; then
				echo "$file:$line: $instruction: $(sed -n "${line}p" "$file")"
				status=1
			fi
		done
		if [ $count -lt 10 ]; then
			echo "only $count fused instructions seen: the listing was not understood"
			status=1
		fi
		exit $status
	}
