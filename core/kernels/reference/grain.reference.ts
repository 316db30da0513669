/** What the structure tensor says about one place: how strong the change is, and along which way the form runs. */
export interface Grain {
  /** Eigenvalues, lambda1 ≥ lambda2 ≥ 0. */
  lambda1: number;
  lambda2: number;
  /** Angle of the form (of least change), 0 ≤ angle < π; x to the right, y downwards. */
  tangentRad: number;
  /** (λ1 − λ2) / (λ1 + λ2): 0 no direction, 1 a clean edge. */
  anisotropy: number;
}

/** Orientations over π, and anisotropies over 0…1, of the kernel bank. */
export const orientationCount = 64;
export const anisotropyCount = 16;

/**
 * Eigen-analysis of J = [[e, f], [f, g]]: λ = ½(E + G ± √((E−G)² + 4F²)), φ = ½·atan2(2F, E−G) + π/2.
 * Where there is no change at all the anisotropy is 0.
 */
export function grainReference(e: number, f: number, g: number): Grain {
  const root = Math.hypot(e - g, 2 * f);
  const lambda1 = (e + g + root) / 2;
  const lambda2 = Math.max(0, (e + g - root) / 2);
  const angle = Math.atan2(2 * f, e - g) / 2 + Math.PI / 2;
  return {
    lambda1,
    lambda2,
    tangentRad: ((angle % Math.PI) + Math.PI) % Math.PI,
    anisotropy: lambda1 + lambda2 > 0 ? (lambda1 - lambda2) / (lambda1 + lambda2) : 0,
  };
}

/** Nearest of 64 orientations (φ = o·π/64) and of 16 anisotropies (A = i/15): the numbers of the kernel bank. */
export function quantiseGrain(grain: Pick<Grain, 'tangentRad' | 'anisotropy'>): {
  orientation: number;
  anisotropy: number;
} {
  const step = Math.floor((grain.tangentRad * orientationCount) / Math.PI + 0.5);
  return {
    orientation: ((step % orientationCount) + orientationCount) % orientationCount,
    anisotropy: Math.floor(grain.anisotropy * (anisotropyCount - 1) + 0.5),
  };
}

/** The angle and the anisotropy that numbers of the kernel bank stand for. */
export function grainOfNumbers(
  orientation: number,
  anisotropy: number,
): { tangentRad: number; anisotropy: number } {
  return {
    tangentRad: (orientation * Math.PI) / orientationCount,
    anisotropy: anisotropy / (anisotropyCount - 1),
  };
}
