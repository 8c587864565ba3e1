/** Runs npm scripts side by side, each one's output in one piece when it ends; exits with 1 when any of them failed. */
import { spawn } from 'node:child_process';

const npm = process.platform === 'win32' ? 'npm.cmd' : 'npm';

function run(script) {
  return new Promise((resolve) => {
    const child = spawn(npm, ['run', '--silent', script], { shell: process.platform === 'win32' });
    const output = [];
    child.stdout.on('data', (chunk) => output.push(chunk));
    child.stderr.on('data', (chunk) => output.push(chunk));
    child.on('error', (error) => output.push(Buffer.from(`${error.message}\n`)));
    child.on('close', (code) => {
      process.stdout.write(`${script}: ${code === 0 ? 'ok' : 'failed'}\n`);
      process.stdout.write(Buffer.concat(output));
      resolve(code === 0);
    });
  });
}

const passed = await Promise.all(process.argv.slice(2).map(run));
process.exitCode = passed.every(Boolean) ? 0 : 1;
