#!/bin/sh
# Runs the property tests of this package for hours with new seeds:
#
#	./soak.sh [hours] [checks a round]
#
# It stops at the first fault; rapid then prints how to run the case again.
set -eu
cd "$(dirname "$0")"
end=$(($(date +%s) + ${1:-1} * 3600))
round=0
while [ "$(date +%s)" -lt "$end" ]; do
	round=$((round + 1))
	go test -count=1 -timeout 24h -run 'Properties|Edits|Arrays|NearestAndLocate|Threads$|Stages|Wide' -rapid.checks="${2:-2000}" .
	echo "round $round passed, $(((end - $(date +%s)) / 60)) minutes left"
done
