/** A folder to begin from: commented files to edit, scenes, and the schemas with which an editor checks and completes the files. */
import { mkdir, open, readdir, readFile, rm, stat } from 'node:fs/promises';
import { dirname, join, relative, sep } from 'node:path';
import { fileURLToPath } from 'node:url';
import { type Fault, InputError, InterruptedError } from '../errors.js';

export interface StartOptions {
  /** The folder to fill; made where there is none. */
  folder: string;
  /** Default: the templates and schemas of this package. */
  sources?: StartSources;
  signal?: AbortSignal;
}

export interface StartSources {
  templates: string;
  schemas: string;
}

export interface StartRecord {
  folder: string;
  /** The files made, relative to `folder`, with `/` between the parts, in alphabetical order. */
  files: string[];
}

/** Where the schemas lie in the folder; the leading dot keeps them out of the way. */
const SCHEMA_FOLDER = '.schemas';

const PACKAGE_SOURCES: StartSources = {
  templates: fileURLToPath(new URL('../../scenes/start/', import.meta.url)),
  schemas: fileURLToPath(new URL('../schemas/', import.meta.url)),
};

/** Fill a folder, or change nothing: files that are there stay as they are, and what was made is taken away when the rest cannot be.
 * @throws {InputError} for each file that is in the way, or where `folder` is a file
 * @throws {InterruptedError} after `signal`
 */
export async function start({
  folder,
  sources = PACKAGE_SOURCES,
  signal,
}: StartOptions): Promise<StartRecord> {
  const pairs = [
    ...(await filesBelow(sources.templates)).map((name) => ({ name, from: join(sources.templates, name) })),
    ...(await filesBelow(sources.schemas)).map((name) => ({
      name: join(SCHEMA_FOLDER, name),
      from: join(sources.schemas, name),
    })),
  ];
  await refuseFilesInTheWay(
    folder,
    pairs.map(({ name }) => name),
  );
  const made: string[] = [];
  try {
    for (const { name, from } of pairs) {
      if (signal?.aborted) throw new InterruptedError();
      await place(from, join(folder, name), relative(dirname(name), SCHEMA_FOLDER), made);
    }
  } catch (error) {
    for (const path of made.reverse()) await rm(path, { recursive: true, force: true });
    throw error;
  }
  return { folder, files: pairs.map(({ name }) => name.split(sep).join('/')).sort() };
}

/** Names of all files below a folder, relative to it. */
async function filesBelow(folder: string): Promise<string[]> {
  const names = await readdir(folder, { recursive: true });
  const areFiles = await Promise.all(names.map(async (name) => (await stat(join(folder, name))).isFile()));
  return names.filter((_, at) => areFiles[at]);
}

async function refuseFilesInTheWay(folder: string, names: readonly string[]): Promise<void> {
  const kind = await kindOf(folder);
  if (kind === 'file' || kind === 'behind a file') throw new InputError(fileForFolder(folder));
  const faults: Fault[] = [];
  for (const name of names) {
    const file = join(folder, name);
    const there = await kindOf(file);
    if (there === 'behind a file') faults.push(fileForFolder(file));
    else if (there !== 'free')
      faults.push({ file, message: 'is there already and stays as it is', advice: OTHER_FOLDER });
  }
  if (faults.length > 0) throw new InputError(faults);
}

const OTHER_FOLDER = 'Choose another folder.';

function fileForFolder(file: string): Fault {
  return { file, message: 'a file stands where a folder is needed', advice: OTHER_FOLDER };
}

async function kindOf(path: string): Promise<'free' | 'folder' | 'file' | 'behind a file'> {
  try {
    return (await stat(path)).isDirectory() ? 'folder' : 'file';
  } catch (error) {
    const code = (error as NodeJS.ErrnoException).code;
    if (code === 'ENOENT') return 'free';
    if (code === 'ENOTDIR') return 'behind a file';
    throw error;
  }
}

/** Copy one file and note what was made for it, folders first. */
async function place(from: string, to: string, schemaFolder: string, made: string[]): Promise<void> {
  const firstFolderMade = await mkdir(dirname(to), { recursive: true });
  if (firstFolderMade !== undefined) made.push(firstFolderMade);
  const content = await readFile(from);
  const file = await open(to, 'wx'); // refuses a file that has come up since the check
  made.push(to);
  try {
    await file.writeFile(
      /\.ya?ml$/.test(from) ? withSchemaBeside(content.toString('utf8'), schemaFolder) : content,
    );
  } finally {
    await file.close();
  }
}

/** The line that tells an editor the schema of a file, pointed at the folder's own copy.
 * @param schemaFolder relative to the folder of the file
 */
export function withSchemaBeside(yaml: string, schemaFolder: string): string {
  return yaml.replace(
    /^(# yaml-language-server: \$schema=)(?:.*\/)?([^/\s]+)[ \t]*$/m,
    (_, comment: string, schema: string) => `${comment}${schemaFolder.split(sep).join('/')}/${schema}`,
  );
}
