import { join } from "@std/path";

/** A Slurm of its own on this machine: one node, no accounting. */
export interface Slurm {
  /** Runs one of its commands. */
  readonly run: (command: string, ...args: readonly string[]) => Promise<string>;
  /** Ends its daemons. */
  readonly stop: () => Promise<void>;
}

async function text(command: string, args: readonly string[], env: Record<string, string> = {}) {
  const { success, stdout, stderr } = await new Deno.Command(command, {
    args: [...args],
    env,
    stdin: "null",
  }).output();
  const decoder = new TextDecoder();
  if (!success) throw new Error(`${command} ${args.join(" ")}: ${decoder.decode(stderr)}`);
  return decoder.decode(stdout).trim();
}

function configuration(folder: string, host: string): string {
  const port = 20_000 + (Deno.pid % 20_000);
  return `ClusterName=trial
SlurmctldHost=${host}(127.0.0.1)
SlurmctldPort=${port}
SlurmdPort=${port + 1}
SlurmUser=root
SlurmdUser=root
AuthType=auth/munge
AuthInfo=socket=${folder}/munge.socket,cred_expire=5
StateSaveLocation=${folder}/state
SlurmdSpoolDir=${folder}/spool
SlurmctldPidFile=${folder}/slurmctld.pid
SlurmdPidFile=${folder}/slurmd.pid
SlurmctldLogFile=${folder}/slurmctld.log
SlurmdLogFile=${folder}/slurmd.log
ProctrackType=proctrack/pgid
TaskPlugin=task/none
JobAcctGatherType=jobacct_gather/none
AccountingStorageType=accounting_storage/none
SwitchType=switch/none
MpiDefault=none
SelectType=select/cons_tres
SelectTypeParameters=CR_Core
SchedulerParameters=sched_interval=1,bf_interval=1
SlurmdParameters=config_overrides
ReturnToService=2
KillWait=2
MinJobAge=600
MailProg=/bin/true
NodeName=${host} NodeAddr=127.0.0.1 CPUs=4 State=UNKNOWN
PartitionName=main Nodes=${host} Default=YES MaxTime=INFINITE State=UP
`;
}

/** Starts munge, slurmctld and slurmd on the loopback interface, all their files in a folder. */
export async function startSlurm(folder: string): Promise<Slurm> {
  const host = (await text("hostname", ["-s"])).split(".")[0]!;
  for (const name of ["state", "spool"]) await Deno.mkdir(join(folder, name));
  const key = join(folder, "munge.key");
  await Deno.writeFile(key, crypto.getRandomValues(new Uint8Array(1024)), { mode: 0o400 });
  const conf = join(folder, "slurm.conf");
  await Deno.writeTextFile(conf, configuration(folder, host));
  const env = { SLURM_CONF: conf };
  const daemons: Deno.ChildProcess[] = [];
  const daemon = (command: string, ...args: string[]) => {
    daemons.push(
      new Deno.Command(command, { args, env, stdin: "null", stdout: "null", stderr: "null" })
        .spawn(),
    );
  };
  const stop = async () => {
    for (const child of daemons.reverse()) {
      try {
        child.kill("SIGTERM");
      } catch {
        // It has ended by itself.
      }
      await child.status;
    }
  };
  const files = ["socket", "log", "pid", "seed"].map((name) => join(folder, `munge.${name}`));
  daemon(
    "munged",
    ...["--foreground", "--force", `--key-file=${key}`, `--socket=${files[0]}`],
    ...[`--log-file=${files[1]}`, `--pid-file=${files[2]}`, `--seed-file=${files[3]}`],
  );
  const run = (command: string, ...args: readonly string[]) => text(command, args, env);
  try {
    await until(async () => (await Deno.stat(files[0]!)).isSocket === true);
    daemon("slurmctld", "-D", "-i", "-f", conf);
    await until(async () => (await run("scontrol", "ping")).includes("UP"));
    daemon("slurmd", "-D", "-f", conf);
    await until(async () => (await run("sinfo", "--noheader", "--format=%T")) === "idle");
  } catch (error) {
    await stop();
    throw error;
  }
  return { run, stop };
}

/** Waits until something is so; errors on the way count as not yet. */
export async function until(
  isSo: () => Promise<boolean>,
  options: { seconds?: number; what?: string } = {},
): Promise<void> {
  const { seconds = 120, what = "the condition" } = options;
  const end = performance.now() + 1000 * seconds;
  let last: unknown;
  while (performance.now() < end) {
    try {
      if (await isSo()) return;
      last = undefined;
    } catch (error) {
      last = error;
    }
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
  throw new Error(`waited ${seconds} s in vain for ${what}`, { cause: last });
}
