/** Parts that pages are made of: tables, figures, keys of lines, tiles with one figure each. */
import type { Tone } from '../plots/theme.js';
import { PLOT_CLASS } from '../plots/theme.js';
import { html, type Markup, type Piece, trusted } from './markup.js';

export interface HtmlColumn<Row> {
  head: string;
  /** Columns with the same group, side by side, stand under one heading. */
  group?: string;
  cell(row: Row): string;
  /** `head`: names the row. Default: `number`. */
  kind?: 'number' | 'text' | 'head' | 'wordy';
}

/** A table that scrolls by itself where it is wider than the page. */
export function figureTable<Row>(
  caption: string,
  rows: readonly Row[],
  columns: readonly HtmlColumn<Row>[],
): Markup {
  const groups: { title: string; span: number }[] = [];
  for (const { group = '' } of columns) {
    const last = groups.at(-1);
    if (last !== undefined && last.title === group) last.span++;
    else groups.push({ title: group, span: 1 });
  }
  const hasGroups = groups.some(({ title }) => title !== '');
  const isText = (kind: HtmlColumn<Row>['kind']) => kind !== undefined && kind !== 'number';
  return html`<div class="scroll" tabindex="0" role="region" aria-label="${caption}"><table>
<caption>${caption}</caption>
<thead>${
    hasGroups &&
    html`<tr>${groups.map(({ title, span }) =>
      title === ''
        ? html`<td colspan="${span}"></td>`
        : html`<th scope="colgroup" colspan="${span}">${title}</th>`,
    )}</tr>`
  }
<tr>${columns.map(({ head, kind }) => html`<th scope="col"${isText(kind) && trusted(' class="text"')}>${head}</th>`)}</tr></thead>
<tbody>${rows.map(
    (row) =>
      html`<tr>${columns.map(({ cell, kind }) => {
        if (kind === 'head') return html`<th scope="row" class="text">${cell(row)}</th>`;
        if (kind === 'text') return html`<td class="text">${cell(row)}</td>`;
        return kind === 'wordy' ? html`<td class="wordy">${cell(row)}</td>` : html`<td>${cell(row)}</td>`;
      })}</tr>
`,
  )}</tbody>
</table></div>
`;
}

/** A table behind a line of text that opens it. */
export function folded(summary: string, body: Piece): Markup {
  return html`<details><summary>${summary}</summary>
${body}
</details>
`;
}

/** A plot, as `drawPlot` gives it, under its heading. */
export function figure(title: string, more: string, svg: string): Markup {
  return html`<figure>
<figcaption><h3>${title}</h3>${more !== '' && html`<span class="more">${more}</span>`}</figcaption>
${trusted(svg)}</figure>
`;
}

export interface KeyEntry {
  text: string;
  tone: Tone;
  dash?: string;
}

/** What the lines of the plots below mean. */
export function lineKey(entries: readonly KeyEntry[]): Markup {
  return html`<ul class="key" aria-label="Lines in the plots">${entries.map(
    ({ text, tone, dash }) =>
      html`<li><svg class="${PLOT_CLASS}" viewBox="0 0 30 12" aria-hidden="true"><line x1="1" x2="29" y1="6" y2="6" stroke="${tone.light}" stroke-width="2.5"${dash !== undefined && html` stroke-dasharray="${dash}"`}/></svg>${text}</li>`,
  )}</ul>
`;
}

export interface Tile {
  what: string;
  value: string;
  where: string;
}

export function tiles(all: readonly Tile[]): Markup {
  return html`<ul class="tiles">${all.map(
    ({ what, value, where }) =>
      html`<li><span class="what">${what}</span><span class="value">${value}</span><span class="where">${where}</span></li>`,
  )}</ul>
`;
}
