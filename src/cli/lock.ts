import { randomBytes } from 'node:crypto';
import { existsSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { hostname } from 'node:os';
import { basename, join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { asUserError } from './failures.js';
import { dropAtEnd, forMessages, keep } from './files.js';

/**
 * One run at a time in a folder, on any file system: whoever wants it lays down a file of a name never used before and
 * then looks who else did. Who sees nobody has the folder; of those who came at once the least name stays. As no name
 * comes twice, what a killed run left can be taken away by anyone without harm to another.
 */
const NAME = /^\.lock-(\d+)-[0-9a-f]{12}@(.*)$/;
const HOST = hostname().replace(/[^\w.-]/g, '_');
/** A lock whose owner cannot be asked (another machine's, in a synced folder) is believed this long. [ms] */
const PATIENCE = 10_000;

/** Locks of this process. */
const ours = new Set<string>();

/** @param work Is told how to ask whether the folder is still its own: not if the machine slept for long. */
export async function withLock<T>(folder: string, work: (held: () => boolean) => Promise<T>): Promise<T> {
  const path = await acquire(folder).catch((error: unknown): never => {
    throw asUserError(error, forMessages(folder));
  });
  try {
    return await work(() => existsSync(path));
  } finally {
    withdraw(path);
  }
}

async function acquire(folder: string): Promise<string> {
  const since = new Map<string, number>();
  for (;;) {
    while (others(folder, '', since).length > 0) await aMoment();
    const own = `.lock-${process.pid}-${randomBytes(6).toString('hex')}@${HOST}`;
    const path = join(folder, own);
    announce(path);
    for (;;) {
      const rest = others(folder, own, since);
      if (rest.length === 0) return path;
      if (rest.some((name) => name < own)) break;
      await aMoment();
    }
    withdraw(path);
    await aMoment();
  }
}

function announce(path: string): void {
  ours.add(basename(path));
  dropAtEnd(path);
  writeFileSync(path, '', { flag: 'wx' });
}

function withdraw(path: string): void {
  rmSync(path, { force: true });
  keep(path);
  ours.delete(basename(path));
}

/** Locks of others that count; those left behind are taken away. `since`: when each was first seen, by our clock. */
function others(folder: string, own: string, since: Map<string, number>): string[] {
  return readdirSync(folder).filter((name) => {
    const match = NAME.exec(name);
    if (!match || name === own) return false;
    const first = since.get(name) ?? performance.now();
    since.set(name, first);
    if (isOwned(Number(match[1]), match[2], name) && performance.now() - first < PATIENCE) return true;
    rmSync(join(folder, name), { force: true });
    return false;
  });
}

/** False only where it is certain that the owner is gone. */
function isOwned(pid: number, host: string, name: string): boolean {
  if (host !== HOST) return true;
  if (pid === process.pid) return ours.has(name);
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return (error as NodeJS.ErrnoException).code !== 'ESRCH';
  }
}

const aMoment = (): Promise<void> => pause(5 + 20 * Math.random());
