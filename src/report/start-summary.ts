/** What `start` tells: the files it made and what to do with them. */

export function startSummary({ folder, files }: { folder: string; files: readonly string[] }): string {
  const rig = files.find((name) => name.endsWith('.rig.yaml'));
  const scene = files.find((name) => name.endsWith('.png'));
  const next = [`cd ${shellWord(folder)}`];
  if (rig !== undefined) next.push(`foreglass zones --rig ${shellWord(rig)}`);
  if (rig !== undefined && scene !== undefined) {
    next.push(`foreglass render ${shellWord(scene)} --rig ${shellWord(rig)} --out picture.png`);
  }
  const shown = files.filter((name) => !name.startsWith('.'));
  return [
    `Made in ${folder}:`,
    ...shown.map((name) => `  ${name}`),
    ...(shown.length < files.length
      ? ['  and schemas, with which an editor checks and completes the YAML files']
      : []),
    '',
    'What to do next: look at the contrast by field zone, render a scene, then change the rig and do both again.',
    ...next.map((line) => `  ${line}`),
    '',
  ].join('\n');
}

/** A word as a POSIX shell reads it. */
function shellWord(word: string): string {
  return /^[\w@%+=:,./-]+$/.test(word) ? word : `'${word.replaceAll("'", "'\\''")}'`;
}
