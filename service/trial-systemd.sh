#!/usr/bin/env bash
# Installs what publish.sh made under a real systemd, as docs/service.md says, and breaks it on purpose. As root, after
#   service/publish.sh linux-x64
# systemd is process 1 of namespaces of its own, over a small Debian that is made once and kept in TRIAL_ROOT; this
# machine's own service manager and network are not touched. Needs debootstrap, curl, a mounted cgroup v2, and the .NET SDK
# for the simulated meter. Prints what was seen; ends with 1 if a promise was broken.
# Not pipefail: "grep -q" leaves at its first find, and who writes to it then fails by design.
set -eu
cd "$(dirname "$0")/.."
root=${TRIAL_ROOT:-/var/tmp/lampwarden-trial}
published=$PWD/publish/linux-x64
unit=/etc/systemd/system/lampwarden.service
record=/var/lib/lampwarden
work=$(mktemp -d)
init='' meter='' broken=0

stop_here() { echo "trial-systemd: $1" >&2; exit 2; }
[ "$(id -u)" = 0 ] || stop_here "only root can make namespaces with a systemd in them."
[ -x "$published/lampwarden" ] || stop_here "$published/lampwarden is not there; run service/publish.sh linux-x64 first."
groups=$(findmnt -n -t cgroup2 -o TARGET | head -1)
[ -n "$groups" ] || stop_here "no cgroup v2 is mounted here, and systemd needs one."
group=$groups/lampwarden-trial-$$

clean() {
  [ -z "$meter" ] || kill "$meter" 2>/dev/null || true
  # The kernel ends everything in a process namespace with its process 1.
  [ -z "$init" ] || kill -9 "$init" 2>/dev/null || true
  sleep 1
  # Innermost groups first: a group with a child cannot be removed.
  [ ! -d "$group" ] || find "$group" -depth -type d -exec rmdir {} \; 2>/dev/null || true
  rm -rf "$work"
}
trap clean EXIT

within() { # SECONDS COMMAND...: whether it comes true in that time
  local end=$((SECONDS + $1)); shift
  until "$@" >/dev/null 2>&1; do [ $SECONDS -lt $end ] || return 1; sleep 0.3; done
}
inside() { nsenter -t "$init" -a -r -w env -i PATH=/usr/sbin:/usr/bin:/sbin:/bin LANG=C.UTF-8 "$@"; }
shown() { inside systemctl show -p "$1" --value lampwarden; }
is() { [ "$(shown "$1")" = "$2" ]; }
journal() { inside journalctl -u lampwarden -o cat --no-pager; }
said() { journal | grep -q -- "$1"; }
page() { nsenter -t "$init" -n curl -sf "http://127.0.0.1:5080$1"; }
field() { grep -o "\"$1\": *[^,}]*" | head -1 | sed 's/^[^:]*: *//; s/"//g'; }
last_run() { page '/api/runs?most=1' | field run; }
promise() { # WHAT SEEN COMMAND...
  local what=$1 seen=$2; shift 2
  if "$@" >/dev/null 2>&1; then echo "kept    $what: $seen"; else echo "BROKEN  $what"; broken=$((broken + 1)); journal | tail -15; fi
}

boot() {
  [ -e "$root/sbin/init" ] || debootstrap --variant=minbase --include=systemd,systemd-sysv,dbus bookworm "$root" >/dev/null
  rm -rf "$root/opt/lampwarden" "$root/etc/lampwarden" "$root$record" "$root$unit"* "$root/etc/systemd/system/multi-user.target.wants/lampwarden.service"
  # What an earlier trial said must not answer for this one.
  rm -rf "$root/var/log/journal"
  install -d -m 777 "$root/srv/open" "$root/home/open"
  mkdir "$group"
  # Into a group of its own first, so that this group is the root that systemd sees.
  bash -c 'echo $$ >"$0/cgroup.procs"; exec unshare --pid --fork --mount --uts --ipc --net --cgroup --propagation private -- bash -ec "$1" "$2"' \
    "$group" '
      mount --bind "$0" "$0"; cd "$0"
      mount -t proc proc proc; mount -t sysfs sysfs sys; mount -t cgroup2 cgroup2 sys/fs/cgroup
      mount -t tmpfs tmpfs run -o mode=755; mount -t tmpfs tmpfs tmp; mount -t tmpfs tmpfs dev -o mode=755
      for node in null zero full random urandom tty; do touch dev/$node; mount --bind /dev/$node dev/$node; done
      # By its mode anybody may open the first: that the service cannot is then the work of DevicePolicy.
      mknod -m 666 dev/foreign c 10 200; mknod -m 660 dev/ttyS0 c 4 64; chgrp 20 dev/ttyS0
      mkdir dev/pts dev/shm; mount -t devpts devpts dev/pts -o newinstance,ptmxmode=666; ln -s pts/ptmx dev/ptmx
      mkdir -p .old; pivot_root . .old; umount -l /.old
      exec env -i container=trial PATH=/usr/sbin:/usr/bin:/sbin:/bin /lib/systemd/systemd' "$root" >"$work/boot.log" 2>&1 </dev/null &
  found() { init=$(head -1 "$group/init.scope/cgroup.procs") && [ "$(inside systemctl is-system-running)" = running ]; }
  within 60 found || { cat "$work/boot.log"; stop_here "systemd did not come up."; }
}

meter_up() {
  nsenter -t "$init" -n dotnet tools/simulator/bin/Release/net10.0/Lampwarden.Simulator.dll --scenario config/scenarios/quiet-night.json --tcp 5025 >"$work/meter.log" 2>&1 &
  meter=$!
  within 20 grep -q 5026 "$work/meter.log"
}

settings() {
  cat <<'JSON'
{ "benches": [ { "name": "attic", "mains": "230 V 50 Hz", "bank": "100 W 230 V || 75 W 230 V", "unit": "resistor 1100 ohm", "meters": [
  { "name": "line", "quantity": "lineCurrent", "readingsPerSecond": 4, "windowSeconds": 0.2, "transport": { "kind": "tcp", "host": "127.0.0.1", "port": "5025" } },
  { "name": "mains", "quantity": "mainsVoltage", "readingsPerSecond": 4, "windowSeconds": 0.2, "transport": { "kind": "tcp", "host": "127.0.0.1", "port": "5026" } } ] } ] }
JSON
}

drop_in() {
  mkdir -p "$root$unit.d"
  printf '[Service]\n%s\n' "$1" >"$root$unit.d/trial.conf"
  inside systemctl daemon-reload
}

going() { is ActiveState active && page /health | grep -q '"status": "ok"' && last_run | grep -q .; }
# Carried on: a later run that says which one it carries on, with the absence on record.
carried_on() { going && [ "$(last_run)" != "$1" ] && said "carries on run $1" && page "/api/runs/$(last_run)" | grep -q service-down; }

dotnet build tools/simulator -c Release -v q --nologo >"$work/build.log" || { cat "$work/build.log"; stop_here "the simulator could not be built."; }
boot
echo "$(inside systemctl --version | head -1) is process 1, cgroup v2"

cp -r "$published" "$root/opt/lampwarden"
inside id lampwarden >/dev/null 2>&1 || inside useradd --system --groups dialout lampwarden
mkdir "$root/etc/lampwarden"
settings >"$root/etc/lampwarden/bench.json"
cp service/lampwarden.service "$root$unit"
meter_up
promise "checksums" "all files of /opt/lampwarden" inside sh -c 'cd /opt/lampwarden && sha256sum -c --quiet SHA256SUMS'
promise "systemd-analyze verify" "nothing to say" test -z "$(inside systemd-analyze verify lampwarden.service 2>&1)"
promise "enable --now" "returned" inside systemctl enable --now lampwarden
promise "Type=notify" "active, '$(shown StatusText)', watchdog $(shown WatchdogUSec)" is StatusText "watching 1 bench"
promise "it watches" "health ok, a run began" within 40 going
exposure=$(inside systemd-analyze security lampwarden --no-pager | sed -n 's/.*exposure level for lampwarden.service: //p')
promise "systemd-analyze security" "$exposure" test -n "$exposure"
strays=$(inside find / -xdev -user lampwarden -not -path "$record*"; inside find /tmp /run /dev/shm -user lampwarden)
promise "writes" "files of its own only in $record, mode $(stat -c %a "$root$record")" test -z "$strays"


first=$(shown MainPID)
# The route's program is the user's: it must run inside the sandbox too.
routes='"alerts": { "routes": [ { "kind": "command", "command": { "program": "/usr/bin/touch", "arguments": [ "/var/lib/lampwarden/told" ] } } ] }, '
sed -i "s|^{ |{ $routes|" "$root/etc/lampwarden/bench.json"
inside systemctl reload lampwarden
promise "reload" "a new route is in use" within 15 said "routes are in use"
promise "reload" "the process is the same" is MainPID "$first"

run=$(last_run) from=$SECONDS
inside sh -c 'kill -9 "$0"' "$first"
promise "kill -9" "started anew, run carried on with its gap" within 40 carried_on "$run"
echo "        after $((SECONDS - from)) s, restarts $(shown NRestarts)"

# The second start of three looks at the sandbox from inside, before the service runs in it.
cat >"$root/opt/probe.sh" <<'PROBE'
for place in /opt/lampwarden /etc/lampwarden /srv/open /home/open /usr /var/tmp/../lib; do if (: >$place/x) 2>/dev/null; then echo "probe wrote $place"; fi; done
(: </dev/foreign) 2>&1 | grep -q 'not permitted' && echo "probe foreign device refused"
(: </dev/ttyS0) 2>&1 | grep -qE 'not permitted|denied' || echo "probe serial port let through"
(: >/var/lib/lampwarden/.probe) && echo "probe record written"
PROBE
run=$(last_run)
drop_in $'WatchdogSec=10\nExecStartPre=-/bin/sh /opt/probe.sh'
inside systemctl restart lampwarden
promise "restart" "run carried on" within 40 carried_on "$run"
promise "sandbox" "the record can be written, nothing else" sh -c '! echo "$1" | grep -q "probe wrote" && echo "$1" | grep -q "record written"' _ "$(journal)"
promise "sandbox" "a device that is no terminal is refused" said "foreign device refused"
promise "sandbox" "a serial port is let through" said "serial port let through"

run=$(last_run) from=$SECONDS
inside sh -c 'kill -STOP "$0"' "$(shown MainPID)"
promise "SIGSTOP" "watchdog (10 s for the trial) killed it" within 40 said "Watchdog timeout"
promise "SIGSTOP" "started anew, run carried on with its gap" within 60 carried_on "$run"
echo "        after $((SECONDS - from)) s, restarts $(shown NRestarts)"

run=$(last_run)
inside systemctl stop lampwarden
promise "stop" "inactive, result $(shown Result), exit code $(shown ExecMainStatus)" sh -c '[ "$1 $2 $3" = "inactive success 130" ]' _ "$(shown ActiveState)" "$(shown Result)" "$(shown ExecMainStatus)"
# Root looks at the record while nobody has it open: this must not leave files that the service cannot open.
inside /opt/lampwarden/lampwarden runs --record "$record" >"$work/runs"
promise "runs" "$(tail -1 "$work/runs")" grep -q "$run" "$work/runs"
rm -rf "$root/opt/lampwarden" "$root$unit.d"
cp -r "$published" "$root/opt/lampwarden"
inside systemctl daemon-reload
inside systemctl start lampwarden
promise "upgrade" "files replaced, started, run carried on" within 40 carried_on "$run"

run=$(last_run)
inside systemctl stop lampwarden
cp "$root/etc/lampwarden/bench.json" "$work/good.json"
sed -i 's/"bank"/"bnak"/' "$root/etc/lampwarden/bench.json"
promise "faulty settings" "the start fails" sh -c '! "$@"' _ nsenter -t "$init" -a -r systemctl start lampwarden
promise "faulty settings" "the journal says why: $(journal | grep -m1 bnak)" said bnak
cp "$work/good.json" "$root/etc/lampwarden/bench.json"
promise "mended settings" "it comes up by itself" within 30 carried_on "$run"

# Last, for a simulated bench that is started anew is a unit that is switched on anew.
kill "$meter"; meter=
promise "meter gone" "told by a program of the user's, inside the sandbox" within 60 test -e "$root$record/told"
inside systemctl restart lampwarden
promise "start without the meter" "active all the same" is ActiveState active
for pause in 0.05 0.2 0.4 0.6 0.9 1.5; do
  inside systemctl stop lampwarden
  inside systemctl start --no-block lampwarden
  sleep $pause
  inside systemctl stop lampwarden
  promise "stop $pause s after start" "not failed, exit code $(shown ExecMainStatus)" is ActiveState inactive
done
if [ $broken = 0 ]; then echo "All promises kept, in $SECONDS s."; else echo "$broken broken, in $SECONDS s."; exit 1; fi
