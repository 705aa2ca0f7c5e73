/** A report as one file that needs nothing else: no request ever leaves it. */
import { createHash } from 'node:crypto';
import { VERSION } from '../../version.js';
import { CAUTION } from '../caution.js';
import { html, type Markup, type Piece, trusted } from './markup.js';
import { pageStyle } from './style.js';

export interface Section {
  /** Of its anchor: a word. */
  id: string;
  title: string;
  body: Piece;
}

export interface Page {
  title: string;
  /** What it was made from, in a line. */
  lead: string;
  warnings: readonly string[];
  sections: readonly Section[];
  /** Makes the page more convenient; everything is there without it. */
  script?: string;
}

/** The text of the file. Same page, same bytes. The policy in its head forbids the browser to load anything. */
export function pageText({ title, lead, warnings, sections, script = '' }: Page): string {
  const scripts =
    script === '' ? "'none'" : `'sha256-${createHash('sha256').update(script).digest('base64')}'`;
  const policy = `default-src 'none'; style-src 'unsafe-inline'; img-src data:; script-src ${scripts}; base-uri 'none'; form-action 'none'`;
  return `<!doctype html>\n${
    html`<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${trusted(policy)}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="generator" content="foreglass ${VERSION}">
<title>${title}</title>
<link rel="icon" href="data:,">
<style>
${trusted(pageStyle())}
</style>
</head>
<body>
<a class="skip" href="#main">To the figures</a>
<header><div class="wrap">
<h1>${title}</h1>
<p class="lead">${lead}</p>
<nav aria-label="Sections"><ul>${sections.map(({ id, title: name }) => html`<li><a href="#${id}">${name}</a></li>`)}</ul></nav>
</div></header>
<main id="main" class="wrap">
${warnings.length > 0 && warningBox(warnings)}
${sections.map(
  ({ id, title: name, body }) => html`<section id="${id}" aria-labelledby="${id}-title">
<h2 id="${id}-title">${name}</h2>
${body}
</section>
`,
)}</main>
<footer><div class="wrap">
<p><strong>Caution.</strong> ${CAUTION}</p>
<p class="lead">Made by foreglass ${VERSION}.</p>
</div></footer>
${script !== '' && trusted(`<script>${script}</script>`)}
</body>
</html>
`.text
  }`;
}

function warningBox(warnings: readonly string[]): Markup {
  return html`<div class="warnings" role="note" aria-label="Warnings"><ul>${[...new Set(warnings)].map((warning) => html`<li>${warning}</li>`)}</ul></div>`;
}
