#!/bin/bash
# The batch of docs/batch.md as a job array of four tasks with a join that depends on it,
# while one of two nodes loses its power; then the tables against those of one machine.
# Runs beside nodes.sh.
#
#   trial.sh DESIGN
set -euo pipefail
design=$1
work=$PWD

points=(--vary copies=15:45:8 --vary a=0.43:0.46:4)

cat >array.sh <<END
#!/bin/bash
#SBATCH --array=1-4
#SBATCH --requeue
#SBATCH --output=$work/array-%a.log
#SBATCH --open-mode=append
exec holdfast batch $design ${points[*]} --threads 1 --shard auto --out $work/cluster
END
cat >join.sh <<END
#!/bin/bash
#SBATCH --output=$work/join.log
exec holdfast batch --join $work/cluster --out $work/cluster
END

holdfast batch "$design" "${points[@]}" --out alone >alone.out

array=$(sbatch --parsable array.sh)
join=$(sbatch --parsable --dependency=afterany:"$array" join.sh)

finished() { find cluster/parts -name 'point-*' 2>/dev/null | wc -l; }

# Some points are there, not all: now node2 is gone, and what ran on it begins again.
for _ in $(seq 600); do
  [ "$(finished)" -lt 3 ] || break
  sleep 0.05
done
had=$(finished)
on_node2=$(squeue -h -t R -w node2 -o %K | sort | tr '\n' ' ')
kill -9 "$(cat "$SLURM_NODES/node2.pid")"
scontrol update NodeName=node2 State=DOWN Reason=trial
echo "node2 lost with $had of 32 points there, and these tasks on it: $on_node2"
[ "$had" -lt 32 ] || { echo "the batch was over before the node was lost" >&2; exit 1; }
[ -n "$on_node2" ] || { echo "node2 had no task to lose" >&2; exit 1; }

for _ in $(seq 1200); do
  [ -n "$(squeue -h -j "$array,$join" 2>/dev/null)" ] || break
  sleep 0.1
done
if [ ! -e cluster/manifest.json ]; then
  echo "no tables came of it" >&2
  squeue >&2
  head -n 50 -- *.log >&2
  exit 1
fi
for table in points.arrow states.arrow rates.arrow manifest.json batch.json; do
  cmp "alone/$table" "cluster/$table"
done
cmp alone.out <(grep -v '^tables are in' join.log)
echo "the tables of the array are those of one machine, byte for byte"
