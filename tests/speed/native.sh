#!/usr/bin/env bash
# The portable build against one for this processor only (-C target-cpu=native): the kernel bench of both, run in turn.
# Writes reports/speed/native.csv: medians over the turns, ns per planet-step with tangent vector at the highest level.
set -euo pipefail
cd "$(dirname "$0")/../.."
built() { cargo bench --bench kernel --no-run --message-format=json "$@" 2>/dev/null |
    sed -n 's/.*"executable":"\([^"]*kernel-[^"]*\)".*/\1/p' | tail -1; }
portable=$(built)
native=$(RUSTFLAGS="-C target-cpu=native" built --target-dir "${NATIVE_TARGET:-target/native}")
turns=$(mktemp)
trap 'rm -f "$turns"' EXIT
for _ in 1 2 3 4 5; do
    "$portable" print | sed 's/^/portable,/' >>"$turns"
    "$native" print | sed 's/^/native,/' >>"$turns"
done
python3 - "$turns" <<'PYTHON'
import csv, statistics, sys
times = {}
for build, planets, lanes, tangent, ns, *_ in csv.reader(open(sys.argv[1])):
    if tangent == "with" and lanes != "scalar":
        times.setdefault((int(planets), lanes), {}).setdefault(build, []).append(float(ns))
with open("reports/speed/native.csv", "w") as out:
    print("planets,lanes,portable_ns,native_ns,portable_over_native", file=out)
    for (planets, lanes), of in times.items():
        p, n = statistics.median(of["portable"]), statistics.median(of["native"])
        print(f"{planets},{lanes},{p:.2f},{n:.2f},{p / n:.3f}", file=out)
PYTHON
cat reports/speed/native.csv
