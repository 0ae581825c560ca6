#!/usr/bin/env bash
# Submits a batch as an array of parts and a job that gathers them:
#   submit.sh MANIFEST PARTS [options of sbatch for both jobs]
set -euo pipefail

manifest=$1
parts=$2
shift 2

MILLRACE_HOME=$(cd "$(dirname "$0")/../.." && pwd)
export MILLRACE_HOME
here=$MILLRACE_HOME/examples/cluster

part=$(sbatch --parsable "$@" --array="1-$parts" "$here/part.sbatch" "$manifest")
gather=$(sbatch --parsable "$@" --dependency="afterany:$part" "$here/gather.sbatch" "$manifest")
echo "parts: job $part, tables: job $gather"
