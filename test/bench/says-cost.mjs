/** Loaded before a program that is measured: at its end it says what it took. */
import { writeSync } from 'node:fs';

process.on('exit', () => {
  const { userCPUTime, systemCPUTime, maxRSS } = process.resourceUsage();
  writeSync(2, `\ncost ${JSON.stringify({ cpu: (userCPUTime + systemCPUTime) / 1e6, memory: maxRSS / 1024 })}\n`);
});
