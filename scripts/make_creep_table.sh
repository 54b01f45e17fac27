#!/bin/sh
# Recomputes core/halfspace/creep_coefficients_table.cpp and data/tables/creep_coefficients.csv. Run from the top folder.
set -e
out=$(mktemp -d)
trap 'rm -r "$out"' EXIT
c++ -std=c++20 -O2 -I. -isystem /usr/include/eigen3 scripts/make_creep_table.cpp \
    core/halfspace/creep_coefficients_spectral.cpp core/base/error.cpp core/base/text.cpp -o "$out/make"
mkdir -p data/tables
"$out/make"
