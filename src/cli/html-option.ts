/** `--html`, which several commands share. */
import type { Option } from 'commander';
import { GROUP, grouped } from './common-options.js';
import { type Destination, fileDestination } from './destinations.js';
import type { OptionValues } from './option-values.js';

/** @param what the page shows, in the help's words */
export function htmlOption(what: string): Option {
  return grouped(
    GROUP.output,
    '--html <file>',
    `a page to look at, print and pass on (.html): ${what}, in one file that loads nothing`,
  );
}

export function readHtmlFile(values: OptionValues, given: string | undefined): Destination {
  const path = values.path('--html', given);
  if (path !== undefined && !/\.html?$/i.test(path))
    values.add({
      key: '--html',
      message: 'the file has no ending of a page',
      found: `'${path}'`,
      allowed: '.html, .htm',
    });
  return fileDestination(path);
}
