/** Sectors of the window. */
export const sectorCount = 8;
/** ζ: how far the sectors reach over one another at the centre. */
export const zeta = 1 / 3;
const gamma = (3 * Math.PI) / 16;
/** η: how narrow the sectors are; 3.7737621 with γ = 3π/16. */
export const eta = (zeta + Math.cos(gamma)) / Math.sin(gamma) ** 2;

/**
 * Raw polynomial weight of one sector (Kyprianidis, Semmo, Kang, Döllner 2010, on the unit disc):
 * max(0, (x_k + ζ) − η·y_k²)², where (x_k, y_k) is the point turned back by the sector's angle k·2π/8.
 * @param k 0…7; sector 0 looks along +x
 * @param x on the unit disc, as is `y`
 */
export function rawSectorWeight(k: number, x: number, y: number): number {
  const angle = (k * 2 * Math.PI) / sectorCount;
  const xk = Math.cos(angle) * x + Math.sin(angle) * y;
  const yk = -Math.sin(angle) * x + Math.cos(angle) * y;
  return Math.max(0, xk + zeta - eta * yk * yk) ** 2;
}

/** The fall-off exp(−3.125·|v|²) from the middle of the window to its rim. */
export function falloff(x: number, y: number): number {
  return Math.exp(-3.125 * (x * x + y * y));
}

/**
 * Weights of all sectors at one point of the unit disc: raw weights over their sum, times the fall-off.
 * @returns eight numbers whose sum is the fall-off
 */
export function sectorWeightsReference(x: number, y: number): number[] {
  const raw = Array.from({ length: sectorCount }, (_, k) => rawSectorWeight(k, x, y));
  const sum = raw.reduce((total, weight) => total + weight, 0);
  return raw.map((weight) => (weight / sum) * falloff(x, y));
}
