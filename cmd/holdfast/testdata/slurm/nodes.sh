#!/bin/bash
# Runs a command beside a Slurm of two nodes on this host, and takes Slurm away again.
#
#   nodes.sh COMMAND [ARG...]
#
# Needs root on Linux and the programs of Slurm, munge and iproute2. With --install, which
# changes this host, the missing ones are installed from Debian packages first; the exit
# status is 69 where that cannot be done.
#
# Slurm and the command live in namespaces of their own (network, processes, host name): they
# see the loopback device alone, and nothing of them outlives this script. A node is a
# process namespace again, so that `kill -9 $(cat $SLURM_NODES/node2.pid)` is its power cut.
set -euo pipefail

unavailable() { echo "nodes.sh: $*" >&2; exit 69; }

missing() {
  local program
  for program in slurmctld slurmd sbatch scontrol munged ip unshare; do
    command -v "$program" >/dev/null || return 0
  done
  return 1
}

install_packages() {
  command -v apt-get >/dev/null || unavailable "no Slurm here, and no apt-get to install it with"
  local log
  log=$(mktemp)
  export DEBIAN_FRONTEND=noninteractive
  {
    apt-get -q -o DPkg::Lock::Timeout=120 update &&
      apt-get -qy -o DPkg::Lock::Timeout=120 install --no-install-recommends slurmctld slurmd slurm-client munge iproute2 util-linux
  } >"$log" 2>&1 || { tail -n 20 "$log" >&2; rm -f "$log"; unavailable "Slurm could not be installed"; }
  rm -f "$log"
}

# outside prepares a folder and goes into the namespaces.
outside() {
  [ "$(uname -s)" = Linux ] && [ "$(id -u)" = 0 ] || unavailable "this needs root on Linux"
  ! missing || [ "$install" = no ] || install_packages
  ! missing || unavailable "Slurm is not installed here"
  unshare --net --uts --mount-proc --pid --fork true 2>/dev/null || unavailable "namespaces cannot be made here"
  home=$(mktemp -d)
  trap 'rm -rf "$home"' EXIT
  local status=0
  unshare --net --uts --mount-proc --pid --fork --kill-child bash "$0" --inside "$home" "$@" || status=$?
  exit "$status"
}

settings() {
  local node
  cat <<END
ClusterName=trial
SlurmctldHost=localhost(127.0.0.1)
SlurmctldPort=18817
SlurmUser=root
SlurmdUser=root
AuthType=auth/munge
AuthInfo=socket=$home/munge/socket,cred_expire=10
CommunicationParameters=NoCtldInAddrAny,NoInAddrAny
ProctrackType=proctrack/linuxproc
TaskPlugin=task/none
JobAcctGatherType=jobacct_gather/none
JobCompType=jobcomp/none
AccountingStorageType=accounting_storage/none
MpiDefault=none
MailProg=/bin/true
SelectType=select/cons_tres
SelectTypeParameters=CR_CPU
ReturnToService=2
SlurmdTimeout=10
SchedulerParameters=batch_sched_delay=0,sched_min_interval=0,sched_interval=2
StateSaveLocation=$home/state
SlurmdSpoolDir=$home/spool.%n
SlurmctldPidFile=$home/slurmctld.pid
SlurmdPidFile=$home/slurmd.%n.pid
SlurmctldLogFile=$home/slurmctld.log
SlurmdLogFile=$home/slurmd.%n.log
PartitionName=all Nodes=ALL Default=YES MaxTime=INFINITE State=UP
END
  for node in 1 2; do
    echo "NodeName=node$node NodeHostname=localhost NodeAddr=127.0.0.1 Port=$((18817 + node)) CPUs=2"
  done
}

# start brings the daemons up and waits until both nodes are idle.
start() {
  local node
  hostname localhost
  ip link set lo up
  ip address add 127.0.0.2/8 dev lo # with one address alone, Slurm does not find 127.0.0.1
  chmod 755 "$home"
  mkdir "$home/munge" "$home/state" "$home/spool.node1" "$home/spool.node2"
  head -c 128 /dev/urandom >"$home/munge/key"
  chmod 600 "$home/munge/key"
  settings >"$SLURM_CONF"
  munged --key-file="$home/munge/key" --socket="$home/munge/socket" --pid-file="$home/munge/pid" \
    --log-file="$home/munge/log" --seed-file="$home/munge/seed"
  slurmctld
  for node in 1 2; do
    unshare --mount-proc --pid --fork --kill-child bash -c "slurmd -D -N node$node & wait" >/dev/null 2>&1 &
    echo $! >"$home/node$node.pid"
  done
  for _ in $(seq 300); do
    [ "$(sinfo -h -o %D%T 2>/dev/null)" != 2idle ] || return 0
    sleep 0.1
  done
  tail -n 20 "$home"/*.log >&2
  unavailable "the nodes did not come up"
}

inside() {
  home=$1
  shift
  export SLURM_CONF=$home/slurm.conf SLURM_NODES=$home
  start
  local status=0
  "$@" || status=$?
  scontrol shutdown >/dev/null 2>&1 || true
  exit "$status"
}

install=no
case ${1:-} in
--inside) shift; inside "$@" ;;
--install) install=yes; shift ;;
esac
[ $# -gt 0 ] || { echo "usage: nodes.sh [--install] COMMAND [ARG...]" >&2; exit 2; }
outside "$@"
