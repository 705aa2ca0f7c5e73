/** What `start` tells: the files it made and what to do with them. */

export function startSummary({ folder, files }: { folder: string; files: readonly string[] }): string {
  const rig = files.find((name) => name.endsWith('.rig.yaml'));
  const scenes = files.filter((name) => name.endsWith('.png'));
  const scene = scenes.find((name) => rig !== undefined && name.includes(stem(rig))) ?? scenes[0];
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
    'What to do next: look at the contrast by field zone, render a scene,',
    'then change the rig and do both again.',
    ...next.map((line) => `  ${line}`),
    '',
  ].join('\n');
}

/** What a rig is called: `belt` of `belt.rig.yaml`. A scene that bears the name is meant for it. */
function stem(rig: string): string {
  return rig.slice(rig.lastIndexOf('/') + 1, -'.rig.yaml'.length);
}

/** A word as a POSIX shell reads it. */
function shellWord(word: string): string {
  return /^[\w@%+=:,./-]+$/.test(word) ? word : `'${word.replaceAll("'", "'\\''")}'`;
}
