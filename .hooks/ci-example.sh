#!/usr/bin/env bash
# What a CI job does with a repository of specs: build the package, verify what was issued, tell what changed.
#
#   .hooks/ci-example.sh [TARGET]    TARGET is the branch that the change goes to; origin/main if left out
#
# Leaves site/ (the package as pages and PDFs) and changes.md (for the text of the change request) behind. Fails on a
# wrong spec, a failed limit, or an issued PDF that is not what calcpack gives for the spec inside it. Sheets that
# changed do not fail it: that is what the change is for. Points of the checklist that are not met do not either, since
# a draft has some; add --strict to the build where only finished sheets are kept.
set -uo pipefail
target=${1:-origin/main}
specs=${SPECS:-specs}
failed=0

run() { echo "+ $*"; "$@"; local status=$?; [ "$status" -eq 0 ] || { echo "status $status" >&2; failed=1; }; }

run calcpack build "$specs" -o site
for pdf in "$specs"/issued/*.pdf; do
  [ ! -f "$pdf" ] || run calcpack verify "$pdf"
done

# The point where the branches part: what others did to the target since then is not this change's.
if base=$(git merge-base "$target" HEAD); then
  echo "+ calcpack compare --since $base $specs"
  calcpack compare --since "$base" "$specs" --format markdown -o changes.md
  [ $? -le 1 ] || failed=1
else
  echo "git finds no point where $target and HEAD part; fetch more of the history (a depth of 0 fetches all)" >&2
  failed=1
fi
exit "$failed"
