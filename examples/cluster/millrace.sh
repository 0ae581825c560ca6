#!/usr/bin/env bash
# Runs millrace from this checkout with what is in Deno's cache: nothing is fetched. DENO may name the
# program where it is not on the path.
set -euo pipefail

home=$(cd "$(dirname "$0")/../.." && pwd)
exec "${DENO:-deno}" run --quiet --v8-flags=--single-threaded-gc --no-prompt --cached-only --frozen \
  --config "$home/deno.json" --allow-read --allow-write "$home/cli/main.ts" "$@"
