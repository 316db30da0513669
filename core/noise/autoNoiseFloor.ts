/** Floor of a photo without noise: differences below it are no form worth a plane of its own. */
const cleanFloor = 0.01;

/**
 * The noise floor that `auto` stands for. A sector's deviation is that of three channels together, so white
 * noise of σ a channel shows as √3·σ; the floor of a clean photo is added in quadrature.
 * @param sigma01 measured noise of the full-resolution photo, encoded units
 * @returns τ_w in encoded units
 */
export function autoNoiseFloor(sigma01: number): number {
  return Math.sqrt(cleanFloor * cleanFloor + 3 * sigma01 * sigma01);
}
