/** Time, processor time and memory of a piece of work, in this process or in one of its own. */
import { spawn } from 'node:child_process';
import { readFileSync } from 'node:fs';

export interface Cost {
  /** By the clock, and on all processors together. [s] */
  readonly wall: number;
  readonly cpu: number;
  /** Most memory held, NaN where this system does not say. [MB] */
  readonly memory: number;
}

export interface Measured<T> extends Cost {
  readonly value: T;
}

/** Runs work in this process. */
export async function measure<T>(work: () => T | Promise<T>): Promise<Measured<T>> {
  const processor = process.cpuUsage();
  const start = performance.now();
  const value = await work();
  const wall = (performance.now() - start) / 1000;
  const { user, system } = process.cpuUsage(processor);
  return { value, wall, cpu: (user + system) / 1e6, memory: NaN };
}

/** Runs work several times after each other in turn, so that all meet the same machine; the best of each counts. */
export async function inTurn<T extends readonly unknown[]>(
  rounds: number,
  works: { readonly [K in keyof T]: () => Promise<Measured<T[K]>> },
): Promise<{ [K in keyof T]: Measured<T[K]> }> {
  const best: (Measured<unknown> | undefined)[] = works.map(() => undefined);
  for (let round = 0; round < rounds; round++) {
    for (const [k, work] of works.entries()) {
      const one = await work();
      const before = best[k];
      best[k] = before
        ? {
            ...one,
            wall: Math.min(one.wall, before.wall),
            cpu: Math.min(one.cpu, before.cpu),
            memory: Math.max(one.memory, before.memory),
          }
        : one;
    }
  }
  return best as { [K in keyof T]: Measured<T[K]> };
}

/** Says at its end what a process of Node's took, by getrusage(2): what polling misses. */
export const SAYS_COST = new URL('./says-cost.mjs', import.meta.url).href;

/** Clock ticks a second of /proc; 100 on every Linux in use. */
const TICKS = 100;

/** Processor time and most memory of a process so far, by proc(5). */
function lookAt(pid: number): { cpu: number; memory: number } | null {
  try {
    const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
    const fields = stat.slice(stat.lastIndexOf(')') + 2).split(' ');
    const memory = /VmHWM:\s+(\d+)/.exec(readFileSync(`/proc/${pid}/status`, 'utf8'));
    return { cpu: (Number(fields[11]) + Number(fields[12])) / TICKS, memory: memory ? Number(memory[1]) / 1024 : NaN };
  } catch {
    return null;
  }
}

/** Runs a command to its end; the value is what it printed. */
export function runCommand(
  command: string,
  args: readonly string[],
  options: { readonly cwd?: string; readonly env?: Readonly<Record<string, string | undefined>> } = {},
): Promise<Measured<string>> {
  return new Promise((resolve, reject) => {
    const start = performance.now();
    const child = spawn(command, args, {
      cwd: options.cwd,
      env: { ...process.env, NO_COLOR: '1', FORCE_COLOR: undefined, ...options.env },
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    let seen = { cpu: NaN, memory: NaN };
    let [out, err] = ['', ''];
    const timer = setInterval(() => (seen = lookAt(child.pid ?? 0) ?? seen), 10);
    child.stdout.setEncoding('utf8').on('data', (text: string) => (out += text));
    child.stderr.setEncoding('utf8').on('data', (text: string) => (err += text));
    child.on('error', reject);
    child.on('close', (code) => {
      clearInterval(timer);
      const wall = (performance.now() - start) / 1000;
      const said = /^cost (\{.*\})$/m.exec(err);
      if (said) seen = JSON.parse(said[1]) as { cpu: number; memory: number };
      if (code === 0) resolve({ value: out, wall, ...seen });
      else reject(new Error(`${command} ${args.join(' ')} ended with ${code}:\n${err}`));
    });
  });
}
