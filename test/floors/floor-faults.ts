/** Checks the map of the house: imports go down the floors only and never in a circle, and some packages have one home. */
import { dirname, join, normalize } from 'node:path/posix';
import { parseSync } from 'vite';

/** The floor of each folder of `src`. A file that lies in `src` itself counts as a folder named after it. */
export const FLOORS: Readonly<Record<string, number>> = {
  errors: 0,
  version: 0,
  kernels: 1,
  numeric: 1,
  optics: 2,
  prescription: 2,
  camera: 2.5,
  charts: 3,
  files: 3,
  imaging: 3,
  measure: 3.5,
  tasks: 3.5,
  dataset: 4,
  fit: 4,
  report: 4,
  jobs: 4.5,
  cli: 5,
  index: 5,
};

/** The model of the rig: types that every part may name, whatever its floor. */
const FOR_ALL = 'optics/rig';

/** Packages that one folder alone may import. */
const HOMES: Readonly<Record<string, string>> = {
  '@observablehq/plot': 'report',
  bullmq: 'jobs',
  'cli-progress': 'cli',
  commander: 'cli',
  'fft.js': 'numeric',
  ioredis: 'jobs',
  linkedom: 'report',
  'polygon-clipping': 'dataset',
  sharp: 'files',
  yaml: 'files',
  zod: 'files',
  'zxing-wasm': 'tasks',
};

/** Folders that run anywhere: none of Node's own modules. */
const WITHOUT_NODE = ['optics', 'prescription'];

/** @param sources file name below `src`, with its ending, to its text
 * @returns one line for each fault, in the order of the files
 */
export function floorFaults(sources: ReadonlyMap<string, string>): string[] {
  const faults: string[] = [];
  const graph = new Map<string, string[]>();
  for (const [file, text] of sources) {
    const from = withoutEnding(file);
    const floor = FLOORS[folderOf(from)];
    if (floor === undefined) faults.push(`${file}: the folder '${folderOf(from)}' has no floor`);
    const { targets, unreadable } = importsOf(file, text);
    faults.push(...unreadable.map((what) => `${file}: ${what}`));
    const inside = targets.filter((target) => target.startsWith('.'));
    graph.set(
      from,
      inside.map((target) => withoutEnding(normalize(join(dirname(file), target)))),
    );
    faults.push(
      ...graph
        .get(from)!
        .flatMap((to) => wayFault(from, to))
        .map((fault) => `${file}: ${fault}`),
    );
    const packages = targets.filter((target) => !target.startsWith('.'));
    faults.push(
      ...packages.flatMap((name) => packageFault(folderOf(from), name)).map((fault) => `${file}: ${fault}`),
    );
  }
  return [...faults, ...circles(graph).map((circle) => `circle: ${circle.join(' -> ')}`)];
}

function wayFault(from: string, to: string): string[] {
  if (to.startsWith('..')) return [`imports ${to}, outside of src`];
  const [own, other] = [folderOf(from), folderOf(to)];
  if (own === other || to === FOR_ALL) return [];
  if (FLOORS[other] === undefined) return [`imports ${to}, whose folder has no floor`];
  if (FLOORS[other] < FLOORS[own]) return [];
  const direction = FLOORS[other] === FLOORS[own] ? 'sideways' : 'up';
  return [`imports ${direction}: ${to} (floor ${FLOORS[other]}) from floor ${FLOORS[own]}`];
}

function packageFault(folder: string, name: string): string[] {
  if (name.startsWith('node:')) {
    return WITHOUT_NODE.includes(folder) ? [`imports ${name}, but ${folder} is to run anywhere`] : [];
  }
  const home = Object.entries(HOMES).find(([known]) => name === known || name.startsWith(`${known}/`))?.[1];
  return home === undefined || home === folder ? [] : [`imports ${name}, which only ${home} may do`];
}

/** Everything that a file names as another module: imports, re-exports, imports of types, `import()` in code and in types, worker files. */
function importsOf(file: string, text: string): { targets: string[]; unreadable: string[] } {
  // AssemblyScript marks functions with decorators, which the grammar of TypeScript allows on classes only.
  const { program, errors } = parseSync(file, text.replace(/^[ \t]*@\w+(\([^)]*\))?/gm, ''));
  const targets: string[] = [];
  const unreadable = errors.map(({ message }) => `cannot be read: ${message}`);
  visit(program, (node) => {
    const named = nameOf(node);
    if (named === undefined) return;
    if (typeof named.value === 'string') targets.push(named.value);
    else unreadable.push('has an import() whose target is not a plain text');
  });
  return { targets, unreadable };
}

interface SyntaxNode {
  type: string;
  [key: string]: unknown;
}

/** The node that names the other module, if this one refers to one. */
function nameOf(node: SyntaxNode): SyntaxNode | undefined {
  switch (node.type) {
    case 'ImportDeclaration':
    case 'ExportAllDeclaration':
    case 'ExportNamedDeclaration':
    case 'ImportExpression':
    case 'TSImportType':
      return (node.source ?? node.argument ?? undefined) as SyntaxNode | undefined;
    case 'TSExternalModuleReference':
      return node.expression as SyntaxNode;
    case 'NewExpression': {
      const [first, base] = node.arguments as SyntaxNode[];
      const isModule = (node.callee as SyntaxNode).name === 'URL' && base?.type === 'MemberExpression';
      return isModule && /\.[jt]s$/.test(String(first.value)) ? first : undefined;
    }
  }
  return undefined;
}

function visit(node: unknown, look: (node: SyntaxNode) => void): void {
  if (Array.isArray(node)) for (const child of node) visit(child, look);
  else if (typeof node === 'object' && node !== null) {
    if (typeof (node as SyntaxNode).type === 'string') look(node as SyntaxNode);
    for (const child of Object.values(node)) visit(child, look);
  }
}

/** Circles of files, each once, found depth first. */
function circles(graph: ReadonlyMap<string, readonly string[]>): string[][] {
  const found: string[][] = [];
  const finished = new Set<string>();
  const walk = (file: string, trail: readonly string[]): void => {
    const at = trail.indexOf(file);
    if (at >= 0) found.push([...trail.slice(at), file]);
    if (at >= 0 || finished.has(file)) return;
    for (const next of graph.get(file) ?? []) walk(next, [...trail, file]);
    finished.add(file);
  };
  for (const file of graph.keys()) walk(file, []);
  return found;
}

function folderOf(file: string): string {
  return file.split('/')[0];
}

function withoutEnding(file: string): string {
  return file.replace(/(\.d)?\.[jt]s$/, '');
}
