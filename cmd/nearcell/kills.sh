#!/bin/sh
# Kills the program at hundreds of random moments of imports, builds, keeping and saving,
# and looks each time whether what is left is whole. Usage: cmd/nearcell/kills.sh [TIMES]
set -e
cd "$(dirname "$0")"
NEARCELL_KILLS="${1:-300}" go test . -run 'TestKilledAnywhere' -count=1 -timeout 0 -v
