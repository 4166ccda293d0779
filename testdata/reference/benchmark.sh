#!/usr/bin/env bash
# Times SciPy's stiff methods and this engine on bridge-timing.cir in one run, and prints the ratio.
set -euo pipefail
cd "$(dirname "$0")/../.."
scipy=$(/usr/bin/python3 testdata/reference/time_scipy.py --json)
best() {
  go test ./checks/study -run '^$' -bench "$1" -benchtime 20x -count 10 | awk '/ns\/op/ {if (!best || $3 < best) best = $3} END {print best / 1e9}'
}
/usr/bin/python3 - "$(best EqualAccuracy)" "$(best Condition/cold)" "$scipy" <<'P'
import json
import sys

equal, proven, scipy = float(sys.argv[1]), float(sys.argv[2]), json.loads(sys.argv[3])["fastest_seconds"]
print(f"this engine, one grid of that accuracy: {1e3 * equal:.2f} ms; on two grids with an estimate of the error: {1e3 * proven:.2f} ms")
for way, seconds in scipy.items():
    print(f"SciPy, fastest method, {way}: {1e3 * seconds:.2f} ms, {seconds / equal:.0f} and {seconds / proven:.0f} times as long")
P
