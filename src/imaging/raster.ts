/** Pictures in linear light. */

/** A picture in linear light, 1 being full scale: one plane a band, row-major, width x height samples each. */
export interface Raster {
  width: number;
  height: number;
  planes: Float32Array[];
}
