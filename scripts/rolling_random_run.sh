#!/bin/sh
# The long random run of the rolling solver: 10,000 cases at 32 cells (about a quarter of a minute), or as told.
# Usage: scripts/rolling_random_run.sh [cases] [cells] [build folder]
set -e
cases=${1:-10000}
cells=${2:-32}
build=${3:-build/release}
RUNBAND_RANDOM_CASES=$cases RUNBAND_RANDOM_CELLS=$cells nice "$build/tests/test_halfspace" --gtest_filter='RollingSolver.SolvesEveryRandomCase*'
