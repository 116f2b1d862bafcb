#!/usr/bin/env bash
# Checks that the expected lines are what the reference program says of the
# committed samples, to the byte.
set -euo pipefail
cd "$(dirname "$0")"
/usr/bin/python3 -B -m unittest -q test_price.py
for expected in *.csv; do
	/usr/bin/python3 -B expected.py "../../../../samples/${expected%.csv}" | cmp - "$expected"
done
