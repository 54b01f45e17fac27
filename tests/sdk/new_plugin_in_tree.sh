#!/usr/bin/env bash
# new_plugin in a source tree: a copy of what it reads of this one. Usage: new_plugin_in_tree.sh SOURCE-FOLDER
set -euo pipefail
source=$1
tree=$(mktemp -d)
trap 'rm -rf "$tree"' EXIT
fail() {
  printf 'FAILED: %s\n' "$*" >&2
  exit 1
}

mkdir -p "$tree/plugins/wear" "$tree/tests/analysis" "$tree/core/analysis" "$tree/viewer"
cp -r "$source/scripts" "$source/.clang-format" "$tree"
cp "$source/plugins/CMakeLists.txt" "$tree/plugins"
touch "$tree/tests/analysis/registry_test.cpp"
git -C "$tree" init -q

"$tree/scripts/new_plugin" curve_squeal >"$tree/said" || fail "a good name is refused"
[ "$(ls -A "$tree/plugins/curve_squeal" | tr '\n' ' ')" = "CMakeLists.txt README.md curve_squeal.cpp " ] || fail "plugins/curve_squeal holds $(ls -A "$tree/plugins/curve_squeal")"
[ "$(ls -A "$tree/plugins" | tr '\n' ' ')" = "CMakeLists.txt curve_squeal wear " ] || fail "something lies beside the new folder"
grep -q '^TEST(CurveSquealAnalysis, ' "$tree/tests/analysis/curve_squeal_test.cpp" || fail "the test does not bear the name"
grep -q '^runband_add_plugin(curve_squeal SOURCES curve_squeal.cpp)$' "$tree/plugins/curve_squeal/CMakeLists.txt" || fail "CMakeLists.txt does not bear the name"
if grep -rniE 'my.?analysis' "$tree/plugins/curve_squeal" "$tree/tests/analysis"; then fail "the example's name is left"; fi
grep -q "gtest_filter='CurveSquealAnalysis\.\*'" "$tree/said" || fail "what to do next is not said: $(cat "$tree/said")"
"$tree/scripts/checks/layers" "$tree" || fail "a new plugin breaks the include rule"
(cd "$tree" && git add plugins tests && scripts/checks/format) || fail "a new plugin is not laid out as the tree is"

for taken in curve_squeal wear registry; do
  status=0
  said=$("$tree/scripts/new_plugin" "$taken" 2>&1) || status=$?
  [ "$status" = 2 ] && [[ $said == "new_plugin: "*"take another"* ]] || fail "the taken name $taken gave $status: $said"
done
[ ! -e "$tree/plugins/registry" ] || fail "a refused new_plugin left something behind"
