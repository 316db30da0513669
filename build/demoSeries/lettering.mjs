// A signwriter's capitals of our own, drawn as brush strokes: upright strokes broad, level ones thin,
// with short feet. Only the letters that the ferry carries.

/** @typedef {import('./mesh.mjs').Mesh} Mesh */
/** @typedef {import('./mesh.mjs').Triple} Triple */

const arc = (cx, cy, rx, ry, fromDeg, toDeg, count = 14) =>
  Array.from({ length: count + 1 }, (_, i) => {
    const a = ((fromDeg + ((toDeg - fromDeg) * i) / count) * Math.PI) / 180;
    return [cx + rx * Math.cos(a), cy + ry * Math.sin(a)];
  });

/** Letter → width, strokes (heights 0…1), and the places of its feet. */
const letters = {
  A: {
    width: 0.8,
    strokes: [
      [
        [0.08, 0],
        [0.4, 1],
      ],
      [
        [0.4, 1],
        [0.72, 0],
      ],
      [
        [0.2, 0.34],
        [0.6, 0.34],
      ],
    ],
    feet: [
      [0.08, 0],
      [0.72, 0],
    ],
  },
  B: {
    width: 0.66,
    strokes: [
      [
        [0.14, 0],
        [0.14, 1],
      ],
      [[0.14, 1], [0.32, 1], ...arc(0.32, 0.77, 0.22, 0.23, 90, -90), [0.14, 0.54]],
      [[0.14, 0.54], [0.34, 0.54], ...arc(0.34, 0.27, 0.25, 0.27, 90, -90), [0.14, 0]],
    ],
    feet: [],
  },
  D: {
    width: 0.78,
    strokes: [
      [
        [0.14, 0],
        [0.14, 1],
      ],
      [[0.14, 1], [0.32, 1], ...arc(0.32, 0.5, 0.38, 0.5, 90, -90), [0.14, 0]],
    ],
    feet: [],
  },
  E: {
    width: 0.6,
    strokes: [
      [
        [0.14, 0],
        [0.14, 1],
      ],
      [
        [0.14, 1],
        [0.52, 1],
        [0.52, 0.87],
      ],
      [
        [0.14, 0.53],
        [0.44, 0.53],
      ],
      [
        [0.14, 0],
        [0.54, 0],
        [0.54, 0.14],
      ],
    ],
    feet: [],
  },
  L: {
    width: 0.58,
    strokes: [
      [
        [0.14, 0],
        [0.14, 1],
      ],
      [
        [0.14, 0],
        [0.54, 0],
        [0.54, 0.16],
      ],
    ],
    feet: [[0.14, 1]],
  },
  O: { width: 0.86, strokes: [arc(0.43, 0.5, 0.36, 0.51, 90, 450, 30)], feet: [] },
  R: {
    width: 0.72,
    strokes: [
      [
        [0.14, 0],
        [0.14, 1],
      ],
      [[0.14, 1], [0.36, 1], ...arc(0.36, 0.74, 0.24, 0.26, 90, -90), [0.14, 0.48]],
      [
        [0.34, 0.48],
        [0.66, 0],
      ],
    ],
    feet: [
      [0.14, 0],
      [0.66, 0],
    ],
  },
  S: {
    width: 0.6,
    strokes: [[...arc(0.31, 0.74, 0.21, 0.26, 25, 270), ...arc(0.31, 0.25, 0.23, 0.25, 88, -160)]],
    feet: [],
  },
  T: {
    width: 0.7,
    strokes: [
      [
        [0.35, 0],
        [0.35, 1],
      ],
      [
        [0.06, 0.86],
        [0.06, 1],
        [0.64, 1],
        [0.64, 0.86],
      ],
    ],
    feet: [[0.35, 0]],
  },
  W: {
    width: 1.06,
    strokes: [
      [
        [0.06, 1],
        [0.3, 0],
      ],
      [
        [0.3, 0],
        [0.53, 0.92],
      ],
      [
        [0.53, 0.92],
        [0.76, 0],
      ],
      [
        [0.76, 0],
        [1, 1],
      ],
    ],
    feet: [
      [0.06, 1],
      [1, 1],
    ],
  },
  Y: {
    width: 0.74,
    strokes: [
      [
        [0.05, 1],
        [0.37, 0.46],
      ],
      [
        [0.69, 1],
        [0.37, 0.46],
      ],
      [
        [0.37, 0.46],
        [0.37, 0],
      ],
    ],
    feet: [
      [0.05, 1],
      [0.69, 1],
      [0.37, 0],
    ],
  },
  ' ': { width: 0.42, strokes: [], feet: [] },
};

const gap = 0.12;

/** Width of a text whose letters are one unit high. */
export const textWidth = (text) => [...text].reduce((sum, letter) => sum + letters[letter].width + gap, -gap);

/**
 * Paints a text on a surface.
 * @param {Mesh} mesh @param {string} text @param {number} heightM
 * @param {(x: number, y: number) => { p: Triple, n: Triple }} onto place and normal of a point of the text, metres from its left foot
 * @param {number} material
 */
export function addLettering(mesh, text, heightM, onto, material) {
  let left = 0;
  for (const letter of text) {
    const { width, strokes, feet } = letters[letter];
    for (const stroke of strokes) addStroke(mesh, stroke, left, heightM, onto, material);
    for (const [x, y] of feet) {
      const toward = y > 0.5 ? -0.035 : 0.035;
      addStroke(
        mesh,
        [
          [x - 0.13, y],
          [x + 0.13, y],
        ],
        left,
        heightM,
        onto,
        material,
      );
      addStroke(
        mesh,
        [
          [x, y + toward * 2],
          [x, y],
        ],
        left,
        heightM,
        onto,
        material,
      );
    }
    left += width + gap;
  }
}

/** Half the brush's width for a direction: broad going up or down, thin sideways. */
const halfWidth = (dx, dy) => 0.032 + 0.052 * Math.abs(dy / (Math.hypot(dx, dy) || 1)) ** 1.5;

function addStroke(mesh, points, left, heightM, onto, material) {
  let previous = -1;
  for (let i = 0; i < points.length; i++) {
    const before = points[Math.max(0, i - 1)];
    const after = points[Math.min(points.length - 1, i + 1)];
    const dx = after[0] - before[0];
    const dy = after[1] - before[1];
    const length = Math.hypot(dx, dy) || 1;
    const half = halfWidth(dx, dy);
    const ox = (-dy / length) * half;
    const oy = (dx / length) * half;
    const pair = [-1, 1].map((side) => {
      const x = (left + points[i][0] + ox * side) * heightM;
      const y = (points[i][1] + oy * side) * heightM;
      const { p, n } = onto(x, y);
      return mesh.vertex(
        p[0] + n[0] * 0.004,
        p[1] + n[1] * 0.004,
        p[2] + n[2] * 0.004,
        n[0],
        n[1],
        n[2],
        x,
        y,
        3.3,
      );
    });
    if (previous >= 0) mesh.quad(previous, previous + 1, pair[1], pair[0], material);
    previous = pair[0];
  }
}
