#!/bin/sh
# Writes the generated Go files of package vec into the folder given.
set -eu
out=$1
here=$(cd "$(dirname "$0")" && pwd)
python=${PYTHON:-/usr/bin/python3}
"$python" "$here/coef.py" consts | gofmt >"$out/coef.go"
"$python" "$here/coef.py" table | gofmt >"$out/table8_simd_amd64.go"
for name in lanes bsm slices implied; do
	"$python" "$here/lanes.py" "$here/../${name}8_simd_amd64.go" | gofmt >"$out/${name}4_simd_amd64.go"
done
"$python" "$here/lanes.py" "$out/table8_simd_amd64.go" | gofmt >"$out/table4_simd_amd64.go"
