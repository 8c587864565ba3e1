/** Writes the JSON Schemas into a folder (default: schema beside the built program): `node dist/cli/write-schemas.js`. */
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { jsonSchemas } from '../index.js';
import { writeWhole } from './files.js';

const folder = process.argv[2] ?? fileURLToPath(new URL('../schema', import.meta.url));
for (const [name, schema] of await jsonSchemas()) {
  await writeWhole(join(folder, name), `${JSON.stringify(schema, null, 2)}\n`);
}
