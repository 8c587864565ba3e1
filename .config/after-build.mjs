/** After tsc: JSON Schemas beside the code, and the command made executable. */
import { chmodSync, existsSync } from 'node:fs';
import { execFileSync } from 'node:child_process';

const at = (path) => new URL(`../${path}`, import.meta.url).pathname;
if (existsSync(at('dist/cli/write-schemas.js'))) {
  execFileSync(process.execPath, [at('dist/cli/write-schemas.js'), at('dist/schema')], { stdio: 'inherit' });
}
chmodSync(at('dist/cli/legwork.js'), 0o755);
