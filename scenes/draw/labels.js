// @ts-check
/** Labels of the drawn things, in the COCO layout: where things stand on the ideal scene. */

/** One labelled thing. Coordinates in pixels from the scene's top left corner; the first pixel covers 0 to 1.
 * @typedef {object} Label
 * @property {string} category
 * @property {readonly (readonly [x: number, y: number])[]} outline  polygon
 * @property {readonly (readonly [x: number, y: number] | undefined)[]} [keypoints]  undefined where one does not show
 * @property {string} [text]  what a machine-readable symbol says
 */

/** What each category is, and the names of its key points. */
const CATEGORIES = {
  apple: ['stem'],
  leaf: [],
  qr: [],
  data_matrix: [],
  code_128: [],
};

/** The labels of several scenes as one COCO data set.
 * @param {readonly { file: string, width: number, height: number, labels: readonly Label[] }[]} scenes
 */
export function toCoco(scenes) {
  const names = Object.keys(CATEGORIES);
  let id = 0;
  return {
    images: scenes.map(({ file, width, height }, index) => ({
      id: index + 1,
      file_name: file,
      width,
      height,
    })),
    categories: Object.entries(CATEGORIES).map(([name, keypoints], index) => ({
      id: index + 1,
      name,
      supercategory: 'packing hall',
      ...(keypoints.length > 0 ? { keypoints, skeleton: [] } : {}),
    })),
    annotations: scenes.flatMap(({ labels }, index) =>
      labels.map((label) => annotation(label, ++id, index + 1, names.indexOf(label.category) + 1)),
    ),
  };
}

/** A COCO data set as JSON, one entry a line. @param {ReturnType<typeof toCoco>} coco */
export function cocoText(coco) {
  const lists = Object.entries(coco).map(([name, entries]) => {
    const lines = entries.map((entry) => `  ${JSON.stringify(entry)}`);
    return ` "${name}": [\n${lines.join(',\n')}\n ]`;
  });
  return `{\n${lists.join(',\n')}\n}\n`;
}

/** @param {Label} label @param {number} id @param {number} image @param {number} category */
function annotation({ outline, keypoints, text }, id, image, category) {
  const xs = outline.map(([x]) => x);
  const ys = outline.map(([, y]) => y);
  const left = Math.min(...xs);
  const top = Math.min(...ys);
  return {
    id,
    image_id: image,
    category_id: category,
    bbox: [left, top, Math.max(...xs) - left, Math.max(...ys) - top].map(hundredths),
    segmentation: [outline.flat().map(hundredths)],
    area: hundredths(polygonArea(outline)),
    iscrowd: 0,
    ...(keypoints === undefined
      ? {}
      : {
          keypoints: keypoints.flatMap((point) =>
            point === undefined ? [0, 0, 0] : [...point.map(hundredths), 2],
          ),
          num_keypoints: keypoints.filter((point) => point !== undefined).length,
        }),
    ...(text === undefined ? {} : { text }),
  };
}

/** Outline of an axis-parallel rectangle.
 * @param {number} x @param {number} y @param {number} width @param {number} height
 * @returns {[number, number][]} */
export function rectangle(x, y, width, height) {
  return [
    [x, y],
    [x + width, y],
    [x + width, y + height],
    [x, y + height],
  ];
}

/** @param {Label['outline']} outline */
function polygonArea(outline) {
  let twice = 0;
  outline.forEach(([x, y], index) => {
    const [nextX, nextY] = outline[(index + 1) % outline.length];
    twice += x * nextY - nextX * y;
  });
  return Math.abs(twice) / 2;
}

/** @param {number} value */
function hundredths(value) {
  return Math.round(value * 100) / 100;
}
