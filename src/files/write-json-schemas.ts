/** Step of the build: writes dist/schemas/KIND.schema.json. */
import { mkdirSync, writeFileSync } from 'node:fs';
import { jsonSchemas } from './json-schemas.js';

const folder = new URL('../schemas/', import.meta.url);
mkdirSync(folder, { recursive: true });
for (const [kind, schema] of Object.entries(jsonSchemas())) {
  writeFileSync(new URL(`${kind}.schema.json`, folder), `${JSON.stringify(schema, null, 2)}\n`);
}
