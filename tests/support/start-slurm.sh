#!/usr/bin/env bash
# Starts a Slurm of one node on the loopback of this machine, for the tests that submit to it. Needs root and Debian's
# slurm-wlm and munge. Does nothing where one answers already; never touches a configuration that it did not write.
set -euo pipefail
mark='# One node on loopback, written by start-slurm.sh for tests.'
conf=/etc/slurm/slurm.conf
if timeout 5 sinfo >/dev/null 2>&1; then
  echo 'start-slurm: one answers already'
  exit 0
fi
if [ -e "$conf" ] && ! grep -qF "$mark" "$conf"; then
  echo "start-slurm: $conf was written by someone else; left alone" >&2
  exit 1
fi
state=${SLURM_TEST_STATE:-/var/lib/slurm-test}
mkdir -p /etc/slurm "$state/ctl" "$state/d" /run/munge /var/log/munge /var/lib/munge
host=$(hostname -s)
cpus=$(nproc)
memory=$(awk '/^MemTotal/ {print int($2 / 1024 * 0.8)}' /proc/meminfo)
# Memory is a resource to ask for, times are told to the second, and a job's end is known within seconds: those the tests need.
cat > "$conf" <<CONF
$mark
ClusterName=loopback
SlurmctldHost=$host(127.0.0.1)
SlurmUser=root
SlurmdUser=root
AuthType=auth/munge
CredType=cred/munge
ProctrackType=proctrack/linuxproc
TaskPlugin=task/none
SelectType=select/cons_tres
SelectTypeParameters=CR_CPU_Memory
MpiDefault=none
ReturnToService=2
StateSaveLocation=$state/ctl
SlurmdSpoolDir=$state/d
SlurmctldPidFile=$state/slurmctld.pid
SlurmdPidFile=$state/slurmd.pid
SlurmctldLogFile=$state/slurmctld.log
SlurmdLogFile=$state/slurmd.log
SchedulerType=sched/backfill
SchedulerParameters=bf_interval=1,sched_interval=2,batch_sched_delay=0,defer_batch=no
JobAcctGatherType=jobacct_gather/linux
JobAcctGatherFrequency=1
JobAcctGatherParams=OverMemoryKill
AccountingStorageType=accounting_storage/none
PreemptType=preempt/partition_prio
PreemptMode=REQUEUE
KillWait=2
InactiveLimit=0
OverTimeLimit=0
MinJobAge=300
NodeName=$host NodeAddr=127.0.0.1 CPUs=$cpus RealMemory=$memory State=UNKNOWN
PartitionName=low Nodes=$host Default=YES MaxTime=INFINITE State=UP PriorityTier=1 DefMemPerCPU=256
PartitionName=high Nodes=$host Default=NO MaxTime=INFINITE State=UP PriorityTier=10 PreemptMode=OFF DefMemPerCPU=256
CONF
chown -R munge: /run/munge /var/log/munge /var/lib/munge
if [ ! -s /etc/munge/munge.key ]; then
  dd if=/dev/urandom of=/etc/munge/munge.key bs=128 count=1 status=none
  chown munge: /etc/munge/munge.key
  chmod 400 /etc/munge/munge.key
fi
pgrep -x munged >/dev/null || munged --force >/dev/null 2>&1
pgrep -x slurmctld >/dev/null || slurmctld
pgrep -x slurmd >/dev/null || slurmd
for _ in $(seq 50); do
  if timeout 5 sinfo -h -o %T 2>/dev/null | grep -qE 'idle|mixed|allocated'; then
    echo "start-slurm: ready with $cpus CPUs"
    exit 0
  fi
  sleep 0.2
done
echo 'start-slurm: no node came up' >&2
tail -n 20 "$state"/*.log >&2 || true
exit 1
