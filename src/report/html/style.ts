/** The look of all pages: one column that becomes several where there is room, light and dark, on screens and on paper. */
import { darkStyle, FAINT, FONT, GRID, INK, PAGE, SERIES, type Tone } from '../plots/theme.js';

const VARIABLES: Readonly<Record<string, Tone>> = {
  ink: INK,
  faint: FAINT,
  line: GRID,
  page: PAGE,
  panel: { light: '#f5f6f8', dark: '#1e2227' },
  accent: SERIES[0],
  // words of a verdict: blue and vermillion, apart for all eyes, dark enough for text
  met: { light: '#005a8c', dark: '#6cc0f0' },
  missed: { light: '#a84300', dark: '#f5985f' },
};

function variables(side: keyof Tone): string {
  return Object.entries(VARIABLES)
    .map(([name, tone]) => `--${name}: ${tone[side]};`)
    .join(' ');
}

export function pageStyle(): string {
  return `:root { color-scheme: light dark; ${variables('light')} }
@media screen and (prefers-color-scheme: dark) { :root { ${variables('dark')} } }
* { box-sizing: border-box; }
html { -webkit-text-size-adjust: 100%; }
body { margin: 0; background: var(--page); color: var(--ink); font: 16px/1.5 ${FONT.family}; overflow-wrap: break-word; }
.wrap { max-width: 1240px; margin: 0 auto; padding: 0 16px; }
.skip { position: absolute; left: -9999px; }
.skip:focus { left: 16px; top: 8px; background: var(--page); color: var(--accent); padding: 4px 8px; }
header { border-bottom: 3px solid var(--accent); padding: 20px 0 14px; }
h1 { font-size: 1.6rem; line-height: 1.25; margin: 0 0 4px; font-weight: 650; }
h2 { font-size: 1.2rem; line-height: 1.3; margin: 0 0 4px; font-weight: 650; }
h3 { font-size: 0.95rem; margin: 0 0 2px; font-weight: 650; }
p { margin: 0 0 8px; max-width: 76ch; }
.lead { color: var(--faint); margin: 0; }
nav ul { list-style: none; display: flex; flex-wrap: wrap; gap: 2px 18px; padding: 0; margin: 10px 0 0; font-size: 0.9rem; }
a { color: var(--accent); }
a:focus-visible, button:focus-visible, select:focus-visible, summary:focus-visible, [tabindex]:focus-visible { outline: 3px solid var(--accent); outline-offset: 2px; }
section { padding: 26px 0 6px; }
section + section { border-top: 1px solid var(--line); }
.tiles { display: grid; grid-template-columns: repeat(auto-fit, minmax(min(150px, 100%), 1fr)); gap: 10px; padding: 0; margin: 0 0 16px; list-style: none; }
.tiles li { max-width: 300px; background: var(--panel); border-radius: 6px; padding: 10px 12px; }
.tiles .what { font-size: 0.84rem; display: block; }
.tiles .value { font-size: 1.15rem; font-weight: 650; display: block; font-variant-numeric: tabular-nums; }
.tiles .where { color: var(--ink); font-size: 0.84rem; display: block; }
.verdict { font-size: 1.5rem; font-weight: 700; margin: 0 0 6px; }
.met { color: var(--met); }
.missed { color: var(--missed); }
.plots { display: grid; grid-template-columns: repeat(auto-fill, minmax(min(270px, 100%), 1fr)); gap: 18px 22px; margin: 12px 0; }
.plots > figure { max-width: 420px; }
.plots.few { grid-template-columns: repeat(auto-fill, minmax(min(340px, 100%), 1fr)); }
.plots.few > figure { max-width: 480px; }
.plots.wide { grid-template-columns: minmax(0, 760px); }
.plots.wide > figure { max-width: 760px; }
.plots.wide svg { width: auto; }
figure { margin: 0; min-width: 0; }
figure svg { display: block; width: 100%; height: auto; max-width: 100%; }
figure .scroll svg { width: auto; max-width: none; }
figcaption { font-size: 0.9rem; }
figcaption .more { color: var(--faint); }
.key { list-style: none; display: flex; flex-wrap: wrap; gap: 2px 16px; padding: 0; margin: 8px 0; font-size: 0.9rem; }
.key li { display: flex; align-items: center; gap: 6px; }
.key svg { flex: none; width: 30px; height: 12px; }
.scroll { overflow-x: auto; max-width: 100%; margin: 6px 0 12px; position: relative; }
table { border-collapse: collapse; font-size: 0.86rem; font-variant-numeric: tabular-nums; }
caption { text-align: left; font-weight: 650; padding: 4px 0; }
th, td { padding: 3px 10px; text-align: right; border-bottom: 1px solid var(--line); white-space: nowrap; }
th { font-weight: 600; vertical-align: bottom; }
th.text, td.text { text-align: left; }
td.wordy { white-space: normal; min-width: 16ch; max-width: 46ch; text-align: left; }
thead th { border-bottom: 2px solid var(--line); }
details { margin: 6px 0; }
summary { cursor: pointer; font-size: 0.9rem; color: var(--accent); }
.facts { display: grid; grid-template-columns: repeat(auto-fill, minmax(min(300px, 100%), 1fr)); gap: 0 28px; margin: 8px 0; padding: 0; }
.facts div { display: flex; justify-content: space-between; gap: 12px; border-bottom: 1px solid var(--line); padding: 2px 0; font-size: 0.9rem; }
.facts dt { color: var(--faint); }
.facts dd { margin: 0; text-align: right; overflow-wrap: anywhere; }
.warnings { border-left: 4px solid var(--missed); padding: 6px 12px; background: var(--panel); margin: 16px 0 0; }
.warnings ul { margin: 0; padding-left: 18px; }
footer { border-top: 1px solid var(--line); margin-top: 28px; padding: 16px 0 32px; font-size: 0.9rem; }
.choices { display: flex; flex-wrap: wrap; gap: 6px 18px; margin: 8px 0; font-size: 0.9rem; }
.choices[hidden] { display: none; }
.choices label { display: flex; gap: 6px; align-items: center; }
select { font: inherit; color: var(--ink); background: var(--page); border: 1px solid var(--faint); border-radius: 4px; padding: 2px 6px; }
.frame { display: grid; grid-template-columns: minmax(0, 2fr) minmax(0, 1fr); gap: 14px 30px; align-items: start; }
@media (max-width: 800px) { .frame { grid-template-columns: minmax(0, 1fr); } }
.map { table-layout: fixed; width: 100%; border-collapse: separate; border-spacing: 2px; font-size: 0.86rem; }
.map td, .map th { padding: 0; border: 0; text-align: center; vertical-align: middle; }
.map th { font-weight: 400; font-size: 0.74rem; white-space: normal; }
.map td { height: 46px; border-radius: 3px; cursor: default; print-color-adjust: exact; -webkit-print-color-adjust: exact; }
.map td[aria-selected="true"] { outline: 3px solid var(--ink); outline-offset: -1px; }
.map td:focus-visible { outline: 3px solid var(--accent); outline-offset: 1px; }
@media (max-width: 560px) { .map { border-spacing: 1px; font-size: 0.72rem; } .map td { height: 36px; } .map th { font-size: 0.66rem; } }
.scale { display: flex; align-items: center; gap: 8px; font-size: 0.86rem; margin: 8px 0; }
.scale span.bar { flex: 1; max-width: 320px; height: 12px; border-radius: 2px; print-color-adjust: exact; -webkit-print-color-adjust: exact; }
.zone-card { background: var(--panel); border-radius: 6px; padding: 12px 14px; }
.zone-card svg { display: block; width: 100%; max-width: 240px; height: auto; background: #000; border-radius: 4px; margin: 6px 0; print-color-adjust: exact; }
.zone-card .lead { color: var(--ink); }
.zone-card table { width: 100%; }
.psfs { display: grid; gap: 3px; margin: 12px 0; max-width: 900px; }
.psfs svg { display: block; width: 100%; height: auto; background: #000; border-radius: 2px; }
.sprite { position: absolute; width: 0; height: 0; overflow: hidden; }
@media print {
  body { font-size: 10pt; }
  nav, .choices, .skip, #frame-help { display: none; }
  section { padding: 10px 0 4px; }
  figure, .tiles li, tr, .zone-card { break-inside: avoid; }
  h2, h3, caption { break-after: avoid; }
  .scroll { overflow: visible; }
  table { font-size: 7.5pt; }
  th, td { padding: 2px 5px; white-space: normal; }
  .plots { grid-template-columns: repeat(2, minmax(0, 1fr)); }
}
${darkStyle()}`;
}
