#!/usr/bin/env bash
# The main job on the demo: an invented river, the Tarrowen, whose bed is moved by two floods. Installs what is missing
# (Debian 12), builds, writes the demo's field files, and goes through a records officer's work with the commands
# alone. Results are in build/scenario/, which is made anew each time.
set -euo pipefail
cd "$(dirname "${BASH_SOURCE[0]}")/.."
source scenario/packages.sh

install_missing "${build_packages[@]}"
configure build >/dev/null
cmake --build build -j "$build_jobs" --target scourbook scenario_generate scenario_compare

out=build/scenario
book=$out/tarrowen.scourbook
field=$out/field
truth=$out/truth # what the river really did; only scenario_compare reads it
rm -rf "$out"
mkdir -p "$out"
export PATH="$PWD/build:$PATH"
export SCOURBOOK_BY="records officer A"

say() { printf '\n== %s\n' "$*"; }
# run WORDS...: shows a command, runs it, says how long it took.
run() {
  printf '\n$'
  printf ' %q' "$@"
  printf '\n'
  local begin=$EPOCHREALTIME
  "$@"
  printf '(%s s)\n' "$(awk -v a="$begin" -v b="$EPOCHREALTIME" 'BEGIN { printf "%.1f", b - a }')"
}
# into FILE WORDS...: the same, with the output kept in a file.
into() {
  local file=$1
  shift
  printf '\n$'
  printf ' %q' "$@"
  printf ' > %s\n' "$file"
  local begin=$EPOCHREALTIME
  "$@" >"$file"
  printf '(%s lines, %s s)\n' "$(wc -l <"$file")" \
    "$(awk -v a="$begin" -v b="$EPOCHREALTIME" 'BEGIN { printf "%.1f", b - a }')"
}

begin=2015-10-01T00:00
fill=2020-01-14T06:30  # peak of the flood that filled the channel at Millmark
scour=2022-11-21T10:00 # peak of the flood that scoured it
pier=2020-01-14T10:45  # peak at Lowbridge
end=2025-10-01T00:00

say "Ten years of field files are written: stage every 15 minutes, surveys, gaugings."
run build/scenario_programs/scenario_generate "$field" "$truth"

say "A new book, and the field files are taken in: all of them are good, or nothing is stored."
run scourbook new "$book" --reason "book of the Tarrowen stations"
run scourbook take "$book" "$field"/{stations,gauge_zero,reach}.csv "$field"/survey_*.csv "$field/gaugings.csv"
run scourbook take "$book" "$field/stage_TAR-1.csv" "$field/stage_TAR-2.csv.gz" "$field/stage_corrections.csv"

say "Millmark (TAR-1): the first curve, from the survey of 2015 and the gaugings until the flood of January 2020."
run scourbook derive "$book" TAR-1 --survey M2015 --from $begin --until $fill
run scourbook adopt "$book" TAR-1 1 --from $begin --reason "first curve"

say "The flood of January 2020 filled the channel. The new survey is without the meadow, so its control is carried; what slope, roughness and calibration said is held, what the survey shows is computed anew, and a small trim is fitted to four gaugings."
run scourbook derive "$book" TAR-1 --survey M2020 --from $fill --until $scour --carry overbank
say "The flood of November 2022 scoured it. Three gaugings since."
run scourbook derive "$book" TAR-1 --survey M2022 --from $scour --descends-from 2

say "Both are adopted in one edition; first only tried."
periods=(--period "2,$fill,$scour" --period "3,$scour")
run scourbook adopt "$book" TAR-1 "${periods[@]}" --try
run scourbook adopt "$book" TAR-1 "${periods[@]}" --reason "channel filled in January 2020 and scoured in November 2022"
run scourbook history "$book" TAR-1 --changes
run scourbook curve "$book" TAR-1 3
into "$out/curve_TAR-1_3.csv" scourbook curve "$book" TAR-1 3 --table 0.45,3.4,0.05

say "Lowbridge (TAR-2): one channel, changed by the same flood, never gauged since: the new curve rests on the survey and on what is held."
run scourbook derive "$book" TAR-2 --survey L2015 --from $begin --until $pier
run scourbook adopt "$book" TAR-2 1 --from $begin --reason "first curve"
run scourbook derive "$book" TAR-2 --survey L2020 --from $pier
run scourbook adopt "$book" TAR-2 2 --from $pier --reason "channel scoured in January 2020"

say "A decade of flows, each from the curve valid at its time."
for station in TAR-1 TAR-2; do
  run scourbook replay "$book" $station --from $begin --until $end
  into "$out/flows_$station.csv" scourbook flows "$book" $station --from $begin --until $end
  into "$out/flows_${station}_edition_1.csv" scourbook flows "$book" $station --from $begin --until $end --edition 1
  into "$out/daily_$station.csv" scourbook flows "$book" $station --from $begin --until $end --mean day
done

say "The replay of Millmark is published, and one of its values is traced back to survey, gaugings, reading and people."
run scourbook publish "$book" TAR-1 1 --reason "revised after the survey of 2022"
run scourbook trace "$book" TAR-1 2021-05-08T12:00

say "Everything in the book is checked: ledger, digests, and the publication computed again."
run scourbook check "$book"
into "$out/ledger.txt" scourbook ledger "$book"

say "How far the flows are from the truth, with the history as kept and with the first curve left for ever."
for station in TAR-1 TAR-2; do
  build/scenario_programs/scenario_compare "$truth" $station "history as kept=$out/flows_$station.csv" \
    "one curve for ever=$out/flows_${station}_edition_1.csv" | tee -a "$out/distance_from_truth.txt"
done

say "Done. In $out/:"
printf '  %-28s %s\n' \
  tarrowen.scourbook "the book: scourbook history $book TAR-1" \
  field/ "the field files that were taken in" \
  flows_TAR-1.csv "flows every 15 minutes, with uncertainty, curve, survey and flags; TAR-2 likewise" \
  daily_TAR-1.csv "day means" \
  curve_TAR-1_3.csv "table of the curve in force now" \
  ledger.txt "who did what, when and why" \
  distance_from_truth.txt "the comparison above"
