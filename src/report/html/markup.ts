/** Pieces of a page: templates that escape every text put into them. */

/** Markup that is part of a page as it stands. */
export class Markup {
  readonly text: string;

  constructor(text: string) {
    this.text = text;
  }
}

/** What a template takes: markup, texts and numbers (escaped), lists of these; nothing for what is absent. */
export type Piece = Markup | string | number | null | undefined | false | readonly Piece[];

/** Markup from a template; texts and numbers in it are escaped, also within quoted attributes. */
export function html(texts: TemplateStringsArray, ...pieces: Piece[]): Markup {
  return new Markup(texts.reduce((whole, text, i) => whole + textOf(pieces[i - 1]) + text));
}

/** Markup made elsewhere, by a library or from our own constants; never a text that came from a file. */
export function trusted(text: string): Markup {
  return new Markup(text);
}

function textOf(piece: Piece): string {
  if (piece instanceof Markup) return piece.text;
  if (piece === null || piece === undefined || piece === false) return '';
  if (typeof piece === 'object') return piece.map(textOf).join('');
  return escapeText(String(piece));
}

const ESCAPES: Readonly<Record<string, string>> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
};

export function escapeText(text: string): string {
  return text.replace(/[&<>"']/g, (letter) => ESCAPES[letter]);
}

/** Data for a script of the page, as JSON that cannot end its element. */
export function jsonBlock(id: string, data: unknown): Markup {
  const text = JSON.stringify(data).replaceAll('<', '\\u003c');
  return new Markup(`<script type="application/json" id="${escapeText(id)}">${text}</script>`);
}
