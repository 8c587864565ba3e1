/** After tsc has made the library: JSON Schemas beside it, and the command. */
import { chmodSync, mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { bundleProgram, keepCompiled } from './bundle.js';
import { jsonSchemas } from '../src/index.js';

const dist = fileURLToPath(new URL('../dist', import.meta.url));
mkdirSync(join(dist, 'schema'), { recursive: true });
for (const [name, schema] of await jsonSchemas()) {
  writeFileSync(join(dist, 'schema', name), `${JSON.stringify(schema, null, 2)}\n`);
}
const program = join(dist, 'cli');
await bundleProgram(program);
keepCompiled(program);
chmodSync(join(program, 'legwork.js'), 0o755);
