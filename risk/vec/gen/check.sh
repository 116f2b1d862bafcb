#!/bin/sh
# Fails unless every generated Go file of package vec is what its generator gives.
set -eu
here=$(cd "$(dirname "$0")" && pwd)
fresh=$(mktemp -d)
trap 'rm -rf "$fresh"' EXIT
"$here/generate.sh" "$fresh"
status=0
for file in "$fresh"/*.go; do
	diff -u "$here/../$(basename "$file")" "$file" || status=1
done
exit $status
