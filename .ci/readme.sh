#!/usr/bin/env bash
# Runs every command of the README's sh blocks, but for the test command itself,
# in a copy of the checkout, and stops at the first that fails.
set -euo pipefail
cd "$(dirname "$0")/.."
copy=$(mktemp -d)
trap 'rm -rf "$copy"' EXIT
git ls-files -z | xargs -0 cp --parents -t "$copy"
cd "$copy"
awk '/^```sh$/ {on = 1; next} /^```/ {on = 0} on' README.md | grep -E '^(go run|go install)' | while read -r line; do
  echo "+ $line"
  bash -c "$line" </dev/null >output.txt 2>errors.txt || { cat output.txt errors.txt; exit 1; }
done
