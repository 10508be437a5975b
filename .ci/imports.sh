#!/usr/bin/env bash
# The import order of the house: estimators <- scenarios <- decoders <- bench <- cmd.
# Siblings meet in their folder's root package; estimators/{seed,fourier,resampling}
# are a floor that other estimators may stand on. Tests are held to it as well.
set -euo pipefail
cd "$(dirname "$0")/.."
go list -f '{{$p := .ImportPath}}{{range .Imports}}{{$p}} {{.}}
{{end}}{{range .TestImports}}{{$p}} {{.}}
{{end}}{{range .XTestImports}}{{$p}} {{.}}
{{end}}' ./... | sort -u | awk '
BEGIN { n = split("estimators scenarios decoders bench cmd", layer, " "); for (i = 1; i <= n; i++) rank[layer[i]] = i
        floor["codeassay/estimators/seed"] = floor["codeassay/estimators/fourier"] = floor["codeassay/estimators/resampling"] = 1 }
$2 !~ /^codeassay\// || $1 == $2 { next }
{ split($1, a, "/"); split($2, b, "/"); from = a[2]; to = b[2]; why = ""
  if (!(from in rank) || !(to in rank)) why = "is outside the layout"
  else if (rank[to] > rank[from]) why = "is a higher layer"
  else if (from == to && from != "cmd") {
    root = ($2 == "codeassay/" to)
    if (!root && !(from == "estimators" && ($2 in floor))) why = "is a sibling"
    if (($1 in floor) && ($2 in floor)) why = "is a sibling on the floor"
  }
  else if (from == "scenarios" && to == "estimators" && $2 != "codeassay/estimators" && $2 != "codeassay/estimators/fourier" && $2 != "codeassay/estimators/seed")
    why = "is more of estimators than scenarios may use"
  if (why != "") { print $1 " imports " $2 ": " why; bad = 1 }
}
END { if (!bad) print "import order holds"; exit bad }'
