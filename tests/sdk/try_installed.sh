#!/usr/bin/env bash
# The installed SDK from outside the tree. Usage: try_installed.sh BUILD-FOLDER SOURCE-FOLDER [COMPILER]
set -euo pipefail
build=$1
source=$2
export CXX=${3:-c++}
unset RUNBAND_PLUGIN_PATH RUNBAND_DATA CMAKE_PREFIX_PATH
place=$(mktemp -d)
trap 'rm -rf "$place"' EXIT
umask 022 # a plugin folder that others may write to is refused

fail() {
  printf 'FAILED: %s\n' "$*" >&2
  exit 1
}
quietly() { "$@" >"$place/log" 2>&1 || { cat "$place/log" >&2; fail "$*"; }; }

# Moved after it was installed: nothing in it may know where it was, nor the tree that it came from.
quietly cmake --install "$build" --prefix "$place/first"
mv "$place/first" "$place/runband"
prefix=$place/runband
program=$prefix/bin/runband
if grep -rlF "$place/first" "$prefix/lib/cmake"; then fail "the CMake package knows where it was installed"; fi
if grep -rlF "$source/" "$prefix/lib/cmake"; then fail "the CMake package knows the source tree"; fi
"$program" analyses >"$place/before"
grep -q '^flange_climb ' "$place/before" || fail "the installed program does not find its own plugins"
if grep 'not used' "$place/before"; then fail "an installed plugin is not used"; fi

# What new_plugin must refuse: one sentence, status 2, and nothing made.
new_plugin=$prefix/share/runband/sdk/new_plugin
mkdir "$place/taken" "$place/taken/even_load"
refused() {
  local sentence=$1 said status=0
  shift
  said=$("$new_plugin" "$@" 2>&1) || status=$?
  [ "$status" = 2 ] || fail "new_plugin $* gave status $status: $said"
  [[ $said == "new_plugin: "*"$sentence"* ]] || fail "new_plugin $* said: $said"
}
for bad in EvenLoad even-load 9even _even even__load even_ 'even load' ../even even.load; do
  refused 'is not in snake_case' "$bad" --into "$place/none"
done
refused 'letters; 40 are enough' aaaaaaaaaabbbbbbbbbbccccccccccddddddddddeeee --into "$place/none"
refused 'a name is missing' --into "$place/none"
refused 'the name is empty' '' --into "$place/none"
refused 'two names' even_load odd_load --into "$place/none"
refused '--into wants a folder' even_load --into
refused '--out is not known' even_load --out "$place/none"
refused 'say --into DIR' even_load
refused 'is there already' even_load --into "$place/taken"
refused 'a plugin that Runband has' flange_climb --into "$place/none"
refused 'cannot be made' even_load --into "$program/none"
[ ! -e "$place/none" ] || fail "a refused new_plugin left something behind"

# A plugin of somebody's own; and one whose name is also that of a type of the SDK.
for name in even_load patch; do
  project=$place/made/$name
  quietly "$new_plugin" "$name" --into "$place/made"
  quietly cmake -S "$project" -B "$project/build" -DCMAKE_PREFIX_PATH="$prefix" -DCMAKE_CXX_FLAGS="-Wall -Wextra -Wshadow -Wconversion -Werror"
done
quietly cmake --build "$place/made/patch/build" --target runband_patch
quietly cmake --build "$place/made/even_load/build"
quietly ctest --test-dir "$place/made/even_load/build" --output-on-failure
grep -q '100% tests passed, 0 tests failed out of 1' "$place/log" || fail "the new plugin's test did not run"
[ "$(ls -A "$place/made" | tr '\n' ' ')" = "even_load patch " ] || fail "new_plugin left something beside its folders"

# The installed program, asked by numbers. H. Hertz 1881: the peak is 1.5 times the mean.
case=$prefix/share/runband/demo/bench.toml
export RUNBAND_PLUGIN_PATH=$place/made/even_load/build
number() { awk -v name="\"$1\":" '$1 == name { here = 1 } here && $1 == "\"value\":" { sub(/,/, "", $2); print $2; exit }' "$place/json"; }
near() { awk -v a="$1" -v b="$2" -v tolerance="$3" 'BEGIN { d = (a - b) / b; exit !(a != "" && b + 0 != 0 && d <= tolerance && d >= -tolerance) }'; }
"$program" solve "$case" --with even_load --set analyses.even_load.level=0.6 --json >"$place/json"
mean=$(number mean_pressure)
above=$(number area_above)
peak=$(awk '$1 == "\"peak_pressure_MPa\":" { sub(/,/, "", $2); print $2; exit }' "$place/json")
area=$(awk '$1 == "\"area_mm2\":" { sub(/,/, "", $2); print $2; exit }' "$place/json")
near "$(awk -v m="$mean" 'BEGIN { printf "%.12g", 1.5 * m }')" "$peak" 1e-9 || fail "1.5 times the mean pressure $mean MPa is not the peak $peak MPa"
# 100 kN on the ellipse's area, and 1 - 0.6^2 of it above the level (whole cells: one per cent).
near "$mean" "$(awk -v a="$area" 'BEGIN { printf "%.12g", 1e5 / a }')" 1e-9 || fail "mean pressure $mean MPa is not 100 kN over $area mm2"
near "$above" "$(awk -v a="$area" 'BEGIN { printf "%.12g", 0.64 * a }')" 0.01 || fail "area above the level $above mm2 is not 0.64 of $area mm2"
"$program" analyses even_load | grep -q '^even_load.level = 0.5' || fail "the plugin's page does not show its parameter"
printf 'mean %s MPa, peak %s MPa, area %s mm2, above the level %s mm2\n' "$mean" "$peak" "$area" "$above"

# Refused where others may write, and the program goes on.
chmod g+w "$RUNBAND_PLUGIN_PATH"
"$program" solve "$case" >"$place/out" || fail "a plugin folder that others may write to stops the program"
grep -q 'can be written by others' "$place/out" || fail "a plugin folder that others may write to is not named"
chmod g-w "$RUNBAND_PLUGIN_PATH"

# Installed among Runband's own it needs no path.
unset RUNBAND_PLUGIN_PATH
quietly cmake --install "$place/made/even_load/build" --prefix "$prefix"
"$program" analyses | grep -q '^even_load ' || fail "an installed plugin is not found"
refused 'a plugin that Runband has' even_load --into "$place/none"
