#!/usr/bin/env bash
# The API's main path with curl: model → quote → job → statistics → archive.
# Usage: main-path.sh BASE_URL TEAM TOKEN [FOLDER]; needs curl and node (to read JSON). Prints each step, exits non-zero on any failure.
set -euo pipefail
base=$1 team=$2 token=$3 folder=${4:-$(mktemp -d)}
api="$base/api/v1/teams/$team"

# call METHOD PATH [JSON]: the answer on standard output; an HTTP error ends the script with the problem document.
call() {
  local method=$1 path=$2 body=${3:-}
  local arguments=(--silent --show-error --fail-with-body --request "$method" --header "Authorization: Bearer $token")
  [ -n "$body" ] && arguments+=(--header 'Content-Type: application/json' --data "$body")
  curl "${arguments[@]}" "$api/$path"
}
# field PATH: a value out of the JSON on standard input, such as `quote.id` or `times.-1` (the last).
field() {
  node -e 'const value = process.argv[1].split(".").reduce((at, key) => (Array.isArray(at) ? at.at(Number(key)) : at[key]), JSON.parse(require("fs").readFileSync(0, "utf8"))); console.log(value)' "$1"
}

network='{"timeUnit":"s","species":[{"id":"X","initialCount":0}],"parameters":[{"id":"a","value":10},{"id":"m","value":0.1}],
 "reactions":[{"id":"arrive","equation":"∅ -> X","rateLaw":{"kind":"massAction","constant":"a"}},
              {"id":"leave","equation":"X -> ∅","rateLaw":{"kind":"massAction","constant":"m"}}]}'
stored=$(call POST models "{\"name\":\"Arrivals and departures\",\"network\":$network}")
version=$(field version.id <<<"$stored")
echo "model    $(field model.id <<<"$stored") version $(field version.number <<<"$stored")"

quote=$(call POST quotes "{\"modelVersionId\":\"$version\",\"replicates\":2000,\"horizon\":10,\"gridIntervals\":20,\"method\":\"exact\",\"seed\":42,\"lane\":\"steady\"}")
echo "quote    $(field quote.microcredits.expected <<<"$quote") microcredits, at most $(field quote.microcredits.high <<<"$quote")"

# The upper estimate would stop one job in forty; twice of it leaves room, and what is not used comes back.
cap=$((2 * $(field quote.microcredits.high <<<"$quote")))
job=$(call POST jobs "{\"quoteId\":\"$(field quote.id <<<"$quote")\",\"name\":\"Arrivals by script\",\"capMicrocredits\":$cap}" | field job.id)
until state=$(call GET "jobs/$job" | field job.state) && [ "$state" != queued ] && [ "$state" != running ]; do sleep 0.2; done
echo "job      $job $state, $(call GET "jobs/$job" | field job.chargedMicrocredits) microcredits charged"

statistics=$(call GET "jobs/$job/statistics?point=0")
echo "mean     $(field observables.0.mean.-1 <<<"$statistics") ± $(field observables.0.meanStandardError.-1 <<<"$statistics") at t = 10"

curl --silent --show-error --fail --header "Authorization: Bearer $token" --output "$folder/archive.zip" "$api/jobs/$job/archive"
sha=$(node -e 'console.log(require("crypto").createHash("sha256").update(require("fs").readFileSync(process.argv[1])).digest("hex"))' "$folder/archive.zip")
echo "archive  $folder/archive.zip"
echo "SHA-256  $sha"
