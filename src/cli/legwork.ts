#!/usr/bin/env node
import { readFileSync } from 'node:fs';

// The version is answered before anything else is loaded.
const [first] = process.argv.slice(2);
if (first === '--version' || first === '-V') {
  const { version } = JSON.parse(readFileSync(new URL('../../package.json', import.meta.url), 'utf8')) as {
    version: string;
  };
  process.stdout.on('error', ({ code, message }: NodeJS.ErrnoException) => {
    if (code === 'EPIPE') return;
    process.exitCode = 2;
    process.stderr.write(`legwork: standard output: ${message}\n`);
  });
  process.stdout.write(`${version}\n`);
} else {
  const { load } = await import('./load.js');
  await load().main(process.argv.slice(2));
}
