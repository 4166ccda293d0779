#!/usr/bin/env bash
# Times SciPy's stiff methods and this engine on bridge-timing.cir in one run, and prints the ratio.
set -euo pipefail
cd "$(dirname "$0")/../.."
scipy=$(/usr/bin/python3 testdata/reference/time_scipy.py --json)
ours=$(go test ./checks/study -run '^$' -bench 'Condition/cold' -benchtime 200x -count 3 | awk '/ns\/op/ {if (!best || $3 < best) best = $3} END {print best / 1e9}')
/usr/bin/python3 - "$ours" "$scipy" <<'P'
import json
import sys

ours, scipy = float(sys.argv[1]), json.loads(sys.argv[2])["fastest_seconds"]
print(f"this engine, one condition on two grids: {1e3 * ours:.2f} ms")
for way, seconds in scipy.items():
    print(f"SciPy, fastest method, {way}: {1e3 * seconds:.2f} ms, {seconds / ours:.1f} times as long")
P
