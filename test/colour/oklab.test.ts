import { describe, expect, it } from 'vitest';
import { type Triple, xyzOfLinearSrgb } from '../../core/colour/lab.ts';
import { linearSrgbOfOklab, oklabOfLinearSrgb, oklabOfSrgb, srgbOfOklab } from '../../core/colour/oklab.ts';

/** XYZ → linear sRGB by Cramer's rule over the columns that the project's forward matrix gives. */
function linearOfXyz(xyz: Triple): Triple {
  const columns = [xyzOfLinearSrgb([1, 0, 0]), xyzOfLinearSrgb([0, 1, 0]), xyzOfLinearSrgb([0, 0, 1])];
  const determinant = ([a, b, c]: Triple[]) =>
    a[0] * (b[1] * c[2] - b[2] * c[1]) -
    b[0] * (a[1] * c[2] - a[2] * c[1]) +
    c[0] * (a[1] * b[2] - a[2] * b[1]);
  const whole = determinant(columns);
  const [r, g, b] = [0, 1, 2].map(
    (at) => determinant(columns.map((column, i) => (i === at ? xyz : column))) / whole,
  );
  return [r, g, b];
}

describe('Oklab', () => {
  // XYZ → L, a, b: the pairs that B. Ottosson published with the space (2020), to their three places.
  it.each<[Triple, Triple]>([
    [
      [0.95, 1, 1.089],
      [1, 0, 0],
    ],
    [
      [1, 0, 0],
      [0.45, 1.236, -0.019],
    ],
    [
      [0, 1, 0],
      [0.922, -0.671, 0.263],
    ],
    [
      [0, 0, 1],
      [0.153, -1.415, -0.449],
    ],
  ])('takes XYZ %j to the published %j', (xyz, published) => {
    oklabOfLinearSrgb(linearOfXyz(xyz)).forEach((value, i) => {
      expect(Math.abs(value - published[i])).toBeLessThan(1.5e-3);
    });
  });

  // Computed from the published definition, independently of the project.
  it('takes red and a middle grey where the definition takes them', () => {
    oklabOfSrgb([1, 0, 0]).forEach((value, i) => {
      expect(value).toBeCloseTo([0.627955, 0.224863, 0.125846][i], 5);
    });
    const [l, a, b] = oklabOfSrgb([128 / 255, 128 / 255, 128 / 255]);
    expect(l).toBeCloseTo(0.599871, 6);
    expect(Math.abs(a)).toBeLessThan(1e-6);
    expect(Math.abs(b)).toBeLessThan(1e-6);
  });

  it('comes back from every corner of the gamut, and from colours outside it', () => {
    for (const r of [0, 0.3, 1])
      for (const g of [0, 0.6, 1])
        for (const b of [0, 0.1, 1]) {
          srgbOfOklab(oklabOfSrgb([r, g, b])).forEach((value, i) => {
            expect(value).toBeCloseTo([r, g, b][i], 9);
          });
        }
    const outside: Triple = [1.4, -0.2, 0.3];
    linearSrgbOfOklab(oklabOfLinearSrgb(outside)).forEach((value, i) => {
      expect(value).toBeCloseTo(outside[i], 12);
    });
  });

  it('scales as a whole with the exposure, by its cube root', () => {
    const dark = oklabOfLinearSrgb([0.1, 0.05, 0.2]);
    oklabOfLinearSrgb([0.8, 0.4, 1.6]).forEach((value, i) => {
      expect(value).toBeCloseTo(2 * dark[i], 12);
    });
  });
});
