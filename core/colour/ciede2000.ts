import type { Triple } from './lab.ts';

const degrees = Math.PI / 180;
const hueOf = (b: number, a: number) => (a === 0 && b === 0 ? 0 : (Math.atan2(b, a) / degrees + 360) % 360);
const power7 = (c: number) => c ** 7 / (c ** 7 + 25 ** 7);

/**
 * Colour difference CIEDE2000 with k_L = k_C = k_H = 1, as set out by G. Sharma, W. Wu and E. N. Dalal (Color
 * Research & Application 30(1), 2005), equations 2 to 22.
 * @param one @param other L*, a*, b* of one white
 */
export function ciede2000(one: Triple, other: Triple): number {
  const [l1, a1, b1] = one;
  const [l2, a2, b2] = other;
  const meanChroma = (Math.hypot(a1, b1) + Math.hypot(a2, b2)) / 2;
  const g = 0.5 * (1 - Math.sqrt(power7(meanChroma)));
  const [x1, x2] = [(1 + g) * a1, (1 + g) * a2];
  const [c1, c2] = [Math.hypot(x1, b1), Math.hypot(x2, b2)];
  const [h1, h2] = [hueOf(b1, x1), hueOf(b2, x2)];
  const isGrey = c1 * c2 === 0;
  const apart = h2 - h1;
  const turn = isGrey || Math.abs(apart) <= 180 ? apart : apart > 180 ? apart - 360 : apart + 360;
  const dH = 2 * Math.sqrt(c1 * c2) * Math.sin(((isGrey ? 0 : turn) / 2) * degrees);
  const l = (l1 + l2) / 2;
  const c = (c1 + c2) / 2;
  const h = meanHue(h1, h2, isGrey);
  const t =
    1 -
    0.17 * Math.cos((h - 30) * degrees) +
    0.24 * Math.cos(2 * h * degrees) +
    0.32 * Math.cos((3 * h + 6) * degrees) -
    0.2 * Math.cos((4 * h - 63) * degrees);
  const sL = 1 + (0.015 * (l - 50) ** 2) / Math.sqrt(20 + (l - 50) ** 2);
  const sC = 1 + 0.045 * c;
  const sH = 1 + 0.015 * c * t;
  const turned = 30 * Math.exp(-(((h - 275) / 25) ** 2));
  const rT = -2 * Math.sqrt(power7(c)) * Math.sin(2 * turned * degrees);
  const [tL, tC, tH] = [(l2 - l1) / sL, (c2 - c1) / sC, dH / sH];
  return Math.sqrt(tL * tL + tC * tC + tH * tH + rT * tC * tH);
}

function meanHue(h1: number, h2: number, isGrey: boolean): number {
  if (isGrey) return h1 + h2;
  const sum = h1 + h2;
  if (Math.abs(h1 - h2) <= 180) return sum / 2;
  return sum < 360 ? (sum + 360) / 2 : (sum - 360) / 2;
}
