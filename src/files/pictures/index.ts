/** Picture files: scenes in, pictures out. */
export { LUMINANCE_WEIGHTS, toBands } from './bands.js';
export {
  type EncodeOptions,
  encodePicture,
  encodeRaw,
  refuseLargeSide,
  refuseLinearFormat,
} from './encode.js';
export { fitToSensor } from './fit.js';
export { formatOf, PICTURE_EXTENSIONS, type PictureFormat } from './formats.js';
export { limitPictureThreads } from './library.js';
export { MAX_MEGAPIXELS } from './open.js';
export { type AllocatePlanes, checkPicture, type Picture, sharedPlanes } from './picture.js';
export { type PngEncoding, pngEncoding } from './png-encoding.js';
export { type ReadOptions, readScene, type Scene } from './read.js';
export { pictureSize } from './size.js';
