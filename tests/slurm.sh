#!/usr/bin/env bash
# The shipped array script on a real Slurm of two nodes: one task killed, one cancelled, one requeued; after the two are
# submitted again the folder is complete, and its result that of a single process to the last bit.
#
# Takes a minute. The Slurm is private and listens on this machine only; it is started by a script beside the repository,
# and this check is skipped, in one line, where that or Slurm is not there.
set -euo pipefail
cd "$(dirname "$0")/.."

skip() { echo "tests/slurm.sh: SKIPPED, because $*"; exit 0; }
fail() { echo "tests/slurm.sh: $*" >&2; exit 1; }

slurm=$PWD/../shared/slurm_local.sh
[ -x "$slurm" ] || skip "there is no ../shared/slurm_local.sh"

export PATH="$PATH:/usr/sbin:/sbin"
have() { command -v slurmctld slurmd sbatch munged >/dev/null; }
if ! have && [ "$(id -u)" = 0 ] && command -v apt-get >/dev/null; then
    export DEBIAN_FRONTEND=noninteractive
    apt-get update && apt-get install -y --no-install-recommends slurmctld slurmd slurm-client munge || :
fi
have || skip "slurmctld, slurmd, slurm-client or munge is missing"

# Slurm is to listen on this machine only, so the machine's name must lead to it: in a copy of the name, if need be.
is_local() { [[ $(getent hosts "$(hostname)") =~ ^(127\.|::1) ]]; }
if ! is_local; then
    [ -z "${TDSE_RENAMED:-}" ] || skip "the name $(hostname) does not lead to 127.0.0.1"
    unshare --uts true 2>/dev/null || skip "the machine cannot be given another name here"
    TDSE_RENAMED=1 exec unshare --uts bash -c 'hostname localhost; exec "$@"' - "$PWD/tests/slurm.sh"
fi

cargo build --release --quiet
programs=$(realpath "${CARGO_TARGET_DIR:-target}")/release
export PATH="$programs:$PATH"

place=$(mktemp -d)
chmod 755 "$place"
trap '"$slurm" stop "$place/slurm" || :; rm -rf "$place"' EXIT

# Invented: points of half a second or more each, so that a task is still at work when it is stopped.
cat > "$place/scan.json" <<'JSON'
{
  "title": "Invented for the test of job arrays",
  "atom": { "potential": { "kind": "soft_coulomb", "softening": "1.4142135623730951 bohr" } },
  "field": {
    "pulses": [
      { "wavelength": "400 nm", "intensity": "1e14 W/cm^2", "envelope": { "kind": "sin2", "cycles": 12 } }
    ]
  },
  "numerics": { "spacing": "0.2 bohr", "extent": "400 bohr" },
  "outputs": { "harmonics": { "max_energy": "40 eV", "energy_step": "0.5 eV", "window": { "kind": "blackman" } } },
  "scan": [
    { "parameter": "/field/pulses/0/phase", "name": "cep", "from": "0 deg", "to": "180 deg", "points": 64 }
  ]
}
JSON
tdse run "$place/scan.json" --out "$place/whole" --quiet

export SLURM_CONF=$place/slurm/slurm.conf
NODES=2 CPUS=1 "$slurm" start "$place/slurm"

submit() { (cd "$place" && sbatch --parsable "$@" "$OLDPWD/configs/scan.sbatch" "$place/scan.json" "$place/out"); }
state() { squeue --noheader --array --jobs "$1" --format %T 2>/dev/null || :; }
# await SECONDS WHAT COMMAND…: what a task needs is polled; waiting inside sbatch can outlast the job.
await() {
    local end=$((SECONDS + $1)) what=$2; shift 2
    until "$@"; do [ $SECONDS -lt $end ] || { squeue; fail "no $what in time"; }; sleep 0.2; done
}
is_running() { [ "$(state "$1")" = RUNNING ]; }
is_gone() { [ -z "$(state "$1")" ]; }
# Computing, not only started: the process of the task has a log that says so.
is_computing() { is_running "$1" && sleep 1; }

array=$(submit)
await 30 "running task" is_computing "${array}_1"
scancel --signal=KILL --batch "${array}_1"
await 30 "running task" is_computing "${array}_2"
scancel "${array}_2"
await 30 "running task" is_computing "${array}_3"
scontrol requeue "${array}_3"
await 90 "end of the array" is_gone "$array"

tdse status "$place/out"
tdse status "$place/out" | grep -Eq 'missing +[1-9]' || fail "killed and cancelled tasks left nothing missing"
[ ! -e "$place/out/result.h5" ] || fail "gathered while points are missing"

# What the logs of the folder say of the three: killed, no end in it; else stopped by the signal that Slurm sends first.
killed=$( (grep -L '"event":"ended"' "$place"/out/log/*.jsonl || :) | wc -l)
stopped=$( (grep -l '"signal":"SIGTERM"' "$place"/out/log/*.jsonl || :) | wc -l)
started=$(ls "$place"/out/log/*.jsonl | wc -l)
echo "$started processes: $killed killed, $stopped stopped by a signal"
[ "$killed" -ge 1 ] && [ $((killed + stopped)) = 3 ] && [ "$started" = 9 ] ||
    fail "not one killed, one cancelled, and one requeued, of eight tasks"

again=$(submit --array=1,2)
await 60 "end of the second array" is_gone "$again"
tdse status "$place/out"
tdse status "$place/out" | grep -Eq 'done +64' || { cat "$place"/tdse-*.log; fail "points are missing"; }
[ -e "$place/out/result.h5" ] || fail "nobody gathered"
grep -hE '"(checkpointed|continued)"' "$place"/out/log/*.jsonl | cut -c1-120 || :

TDSE_ONE=$place/whole/result.h5 TDSE_OTHER=$place/out/result.h5 \
    cargo test --release --quiet -p tdse-cli --test program -- --ignored --exact same_bits::two_results
echo "tests/slurm.sh: the array's result is that of one process, bit by bit"
