#!/usr/bin/env bash
# Makes every fixture anew in FOLDER: one to two minutes on two cores. Run: make.sh FOLDER
# Needs R (Debian's r-base-core) and mpmath (Debian's python3-mpmath). What it leaves as
# FOLDER/sample.json is the file committed beside this one.
set -euo pipefail
folder=$1
here=$(cd "$(dirname "${BASH_SOURCE[0]}")" && pwd)
export PYTHONDONTWRITEBYTECODE=1

/usr/bin/python3 "$here/arguments.py" "$folder"
/usr/bin/python3 "$here/oracle.py" "$folder" tables
/usr/bin/python3 "$here/oracle.py" "$folder" tails &
tails=$!
Rscript --vanilla "$here/oracle.R" "$folder"
wait "$tails"
/usr/bin/python3 "$here/sample.py" "$folder"
