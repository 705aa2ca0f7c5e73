/** The schemas of all file kinds as JSON Schema, for editors. */
import { z } from 'zod';
import { cameraPart } from './schemas/camera.js';
import { lensPart } from './schemas/lens.js';
import { prescriptionFile } from './schemas/prescription.js';
import { recipeFile } from './schemas/recipe.js';
import { rigFile } from './schemas/rig.js';
import { taskFile } from './schemas/task.js';

const KINDS = {
  rig: rigFile,
  lens: lensPart,
  camera: cameraPart,
  task: taskFile,
  recipe: recipeFile,
  prescription: prescriptionFile,
};

/** By file kind. Draft 7, which all editors know. */
export function jsonSchemas(): Record<keyof typeof KINDS, object> {
  const entries = Object.entries(KINDS).map(([kind, schema]) => [
    kind,
    z.toJSONSchema(schema, { io: 'input', target: 'draft-7' }),
  ]);
  return Object.fromEntries(entries);
}
