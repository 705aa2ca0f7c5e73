/** What makes the map of the frame answer: pointing at a cell shows its figures and PSF; a choice of frequency, band or direction colours
 * the cells anew. Written for the browser; the page is whole without it. */
export const FRAME_SCRIPT = `(() => {
const data = JSON.parse(document.getElementById('frame-data').textContent);
const byId = (id) => document.getElementById(id);
const table = byId('frame-map');
const cells = [...table.querySelectorAll('td')];
const pick = { lp: byId('pick-frequency'), band: byId('pick-band'), way: byId('pick-direction') };
const chosen = (select, otherwise) => (select ? Number(select.value) : otherwise);
const show = (value, digits) => value.toFixed(digits);
let current = data.axis;

function valueOf(cell) {
  const [along, across] = cell.mtf[chosen(pick.band, 0)][chosen(pick.lp, data.start)];
  const way = chosen(pick.way, 0);
  return way === 1 ? along : way === 2 ? across : Math.min(along, across);
}

function colour() {
  const at = chosen(pick.lp, data.start);
  const top = data.tops[at];
  cells.forEach((td, i) => {
    const value = valueOf(data.cells[i]);
    const step = Math.round(100 * Math.min(1, value / top));
    td.style.background = data.ramp[step];
    td.style.color = data.inks[step];
    td.textContent = show(value, 2);
    td.setAttribute('aria-label', describe(data.cells[i], value));
  });
  byId('scale-top').textContent = show(top, 1);
  byId('map-what').textContent = data.ways[chosen(pick.way, 0)] + ' at ' + data.lp[at] + ' lp/mm' + (data.bands.length > 1 ? ', band ' + data.bands[chosen(pick.band, 0)] : '');
}

function describe(cell, value) {
  return cell.where + ': contrast ' + show(value, 2);
}

function choose(i, isFocus) {
  cells[current].removeAttribute('aria-selected');
  cells[current].tabIndex = -1;
  current = i;
  const td = cells[i];
  const cell = data.cells[i];
  td.setAttribute('aria-selected', 'true');
  td.tabIndex = 0;
  if (isFocus) td.focus();
  byId('zone-where').textContent = cell.where;
  const svg = byId('zone-psf');
  svg.setAttribute('aria-label', 'PSF at ' + cell.where);
  svg.querySelector('g').setAttribute('transform', 'scale(' + cell.flip.join(' ') + ')');
  svg.querySelector('use').setAttribute('href', '#psf-' + cell.psf);
  byId('zone-rms').textContent = show(cell.rms, 3);
  const rows = byId('zone-figures').querySelectorAll('tbody tr');
  let row = 0;
  cell.mtf.forEach((band) => {
    band.forEach(([along, across]) => {
      const slots = rows[row++].querySelectorAll('td.figure');
      slots[0].textContent = show(along, 3);
      slots[1].textContent = show(across, 3);
    });
  });
}

table.setAttribute('role', 'grid');
table.querySelectorAll('tr').forEach((tr) => tr.setAttribute('role', 'row'));
table.querySelectorAll('thead, tbody').forEach((group) => group.setAttribute('role', 'rowgroup'));
table.querySelectorAll('thead th').forEach((th) => th.setAttribute('role', 'columnheader'));
table.querySelectorAll('tbody th').forEach((th) => th.setAttribute('role', 'rowheader'));
cells.forEach((td, i) => {
  td.setAttribute('role', 'gridcell');
  td.tabIndex = -1;
  // not when the page moves under a mouse at rest, as it does on its way to a cell chosen by key
  td.addEventListener('mousemove', () => i !== current && choose(i, false));
  td.addEventListener('focus', () => choose(i, false));
  td.addEventListener('click', () => choose(i, true));
});
table.addEventListener('keydown', (event) => {
  const step = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, -1], ArrowDown: [0, 1] }[event.key];
  if (!step || !cells.includes(event.target)) return;
  event.preventDefault();
  const column = Math.min(data.columns - 1, Math.max(0, (current % data.columns) + step[0]));
  const row = Math.min(data.rows - 1, Math.max(0, Math.floor(current / data.columns) + step[1]));
  choose(row * data.columns + column, true);
});
for (const select of Object.values(pick)) if (select) select.addEventListener('change', colour);
byId('frame-choices').hidden = false;
byId('frame-help').hidden = false;
colour();
choose(data.axis, false);
})();
`;
