// What stands in front of the camera in each plate.

import { addFarBank, addNearBank, addPebbles, addWater, farShoreZ, groundHeight } from './banks.mjs';
import { addAwning, addFerry, addRope } from './ferry.mjs';
import { buildHeron } from './heron.mjs';
import { buildBust, buildFigure, buildHand } from './keeper.mjs';
import { addCoil, addOldPosts, addPost, addStage } from './landing.mjs';
import { material } from './materials.mjs';
import { Mesh, placing, toned } from './mesh.mjs';
import { addGrass, addReeds, addTrees, growTree } from './plants.mjs';
import { randomStream } from './seededNoise.mjs';
import { addBox, addTube } from './solids.mjs';
import { addVillage } from './village.mjs';

const made = new Map();

/** Parts that several plates share are built once per worker. */
function once(name, build) {
  if (!made.has(name)) made.set(name, build());
  return made.get(name);
}

/** Leaves of one triangle each: these trees are never nearer than sixty metres. */
const distant = { distant: true, leaves: 1900, leafM: 0.66 };

const treeKinds = () =>
  once('trees', () => [
    growTree(201, { ...distant }),
    growTree(202, { ...distant, spread: 4.4, tall: 8 }),
    growTree(203, { ...distant, tone: [0.1, 0.11, 0.035], spread: 3 }),
    growTree(204, { ...distant, tall: 12, spread: 2.6, tone: [0.065, 0.1, 0.04] }),
    growTree(205, { ...distant, tall: 3.6, spread: 2.4, low: 0.15, leaves: 1100, leafM: 0.45, trunkM: 0.12 }),
    growTree(206, {
      ...distant,
      tall: 2.6,
      spread: 3,
      low: 0.1,
      leaves: 1000,
      leafM: 0.45,
      trunkM: 0.1,
      tone: [0.09, 0.11, 0.04],
    }),
  ]);

/** Trees too far off to tell their leaves. */
const farKinds = () =>
  once('farTrees', () =>
    [211, 212, 213].map((seed) =>
      growTree(seed, { distant: true, leaves: 110, leafM: 2, spread: 3.4, tall: 8, low: 0.15 }),
    ),
  );

/** Hedges along the fields and woods on the hills. */
function hillPlaces(next) {
  const places = [];
  for (let line = 0; line < 26; line++) {
    const x = -420 + 840 * next();
    const z = farShoreZ + 70 + 420 * next() ** 1.4;
    const across = next() < 0.6;
    const count = 8 + Math.floor(next() * 14);
    for (let i = 0; i < count; i++)
      places.push([
        x + (across ? i * 5.5 : i * 2) + next() * 3,
        z + (across ? i * 1.2 : i * 6) + next() * 3,
        0.45 + 0.6 * next(),
      ]);
  }
  for (let wood = 0; wood < 12; wood++) {
    const [x, z] = [-460 + 920 * next(), farShoreZ + 170 + 330 * next()];
    for (let i = 0; i < 26; i++)
      places.push([x + (next() - 0.5) * 90, z + (next() - 0.5) * 40, 0.9 + 0.6 * next()]);
  }
  return places;
}

const farGround = () =>
  once('farGround', () => {
    const part = new Mesh();
    addFarBank(part);
    addVillage(part);
    return part;
  });

const farPlaces = () =>
  once('farPlaces', () => {
    const next = randomStream(301);
    const trees = [];
    for (let i = 0; i < 100; i++) {
      const x = -190 + 380 * next();
      const back = next();
      const z = farShoreZ + 9 + back * 90;
      if (Math.abs(x + 4) < 50 && back < 0.3 && next() < 0.8) continue;
      trees.push([x, z, 0.75 + 0.5 * next()]);
    }
    return { trees, hills: hillPlaces(next) };
  });

/** Far bank with its village, and what trees of it the camera can see. */
function addFarSide(mesh, sees) {
  mesh.beginDistance();
  mesh.add(farGround());
  const { trees, hills } = farPlaces();
  addTrees(mesh, trees, 302, treeKinds(), sees);
  addTrees(mesh, hills, 303, farKinds(), sees);
}

/** A mesh with room for a whole scene, so that it need not be copied as it grows. */
const sceneMesh = () => new Mesh(900_000, 800_000);

function nearBank() {
  const part = new Mesh();
  addNearBank(part);
  return part;
}

const bank = { bedHeight: groundHeight, bedColour: [0.12, 0.1, 0.065] };

export function landingScene({ eye, pixelAngle, sees }) {
  const mesh = sceneMesh();
  mesh.add(once('nearBank', nearBank));
  addWater(mesh);
  addStage(mesh, { x: 0.6, z0: -9, z1: 5.5 });
  addCoil(mesh, 0.2, 1.21, -2.5);
  mesh.place = placing([6.2, 0, 5.6], 0.32);
  addFerry(mesh);
  mesh.place = null;
  addKeeper(mesh, placing([0.95, 1.21, 2.4], 2.5));
  addRope(mesh, [1.8, 1.5, 4.6], [1.3, 0.9, 6.9], 0.15, 0.02);
  addOldPosts(mesh, [
    [-5, 5, 1.5],
    [-6.3, 7.2, 1.1],
    [-4, 8.8, 1.7],
    [-7.8, 10, 0.8],
    [11.5, 1.5, 1.3],
    [13.4, 2.4, 1.6],
  ]);
  addPebbles(mesh, 303, -3, -4, 7, 3000);
  addGrass(mesh, { seed: 304, x0: -16, x1: 14, z0: -14, z1: -3, count: 42000, eye, pixelAngle });
  addReeds(mesh, { seed: 305, centre: [-8.4, 1.2], radius: [2.2, 1.4], count: 520, eye, pixelAngle });
  addReeds(mesh, { seed: 306, centre: [11.5, -0.5], radius: [2.6, 1.2], count: 520, eye, pixelAngle });
  addFarSide(mesh, sees);
  return {
    mesh,
    water: { ripple: 0.45, body: [0.045, 0.05, 0.03] },
    ...bank,
    centre: [2, 1, 2],
    reachM: 15,
    penumbra: 2.2,
  };
}

/** The keeper at a place of the ferry's deck, inside the ferry's placing. */
function addKeeper(mesh, where) {
  mesh.add(once('figure', buildFigure), where);
}

export function broadsideScene({ eye, pixelAngle, sees }) {
  const mesh = sceneMesh();
  mesh.add(once('nearBank', nearBank));
  addWater(mesh);
  mesh.place = placing([0.4, 0, 7], -0.1);
  addFerry(mesh, { rampUp: [0.75, 0.95] });
  addKeeper(mesh, placing([-3.3, 0.62, -0.75], Math.PI - 0.5));
  mesh.place = null;
  addOldPosts(
    mesh,
    [
      [-5.2, 4.1, 1.9],
      [6.3, 4, 1.75],
      [8.2, 5.2, 1.4],
    ],
    73,
  );
  addRope(mesh, [-5.2, 1.6, 4.1], [-4.9, 1.1, 6.2], 0.12, 0.02);
  addReeds(mesh, {
    seed: 315,
    centre: [7.6, 0.2],
    radius: [2.6, 1.2],
    count: 420,
    eye,
    pixelAngle,
    heightM: 1.5,
  });
  addFarSide(mesh, sees);
  return {
    mesh,
    water: { ripple: 0.3, body: [0.045, 0.052, 0.032] },
    ...bank,
    centre: [0, 1, 6],
    reachM: 9,
    penumbra: 2.4,
  };
}

export function portraitScene({ eye, pixelAngle, sees }) {
  const mesh = sceneMesh();
  addWater(mesh);
  mesh.place = placing([1.6, 0, 7.6], 0.2);
  addFerry(mesh);
  mesh.place = null;
  const away = Math.hypot(eye[0], eye[1] - 2.2, eye[2] - 2);
  mesh.add(
    buildBust(Math.min(0.006, Math.max(0.0022, 5 * away * pixelAngle)), away * pixelAngle),
    placing([0, 2.2, 2], Math.PI + 0.42),
  );
  addOldPosts(
    mesh,
    [
      [-3.2, 5, 2.2],
      [-5, 7, 1.6],
    ],
    74,
  );
  addFarSide(mesh, sees);
  return {
    mesh,
    water: { ripple: 0.4, body: [0.045, 0.05, 0.03] },
    centre: [0, 2.05, 2],
    reachM: 0.62,
    penumbra: 9,
    overheadSpreadM: 0.08,
    hollowM: 0.05,
  };
}

/** The other hand: the same with left and right changed over. */
const mirroredAcross = ({ m, t }) => ({ m: m.map((value, i) => (i % 3 === 0 ? -value : value)), t });

export function handsScene({ pixelAngle }) {
  const mesh = sceneMesh();
  addWater(mesh);
  mesh.add(once('nearBank', nearBank));
  const next = randomStream(331);
  mesh.colour = [0.25, 0.22, 0.185];
  for (let i = 0; i < 4; i++) {
    mesh.colour = toned([0.25, 0.222, 0.185], 0.8 + 0.4 * next());
    addBox(
      mesh,
      [-1.4, 1.2 + next() * 0.004, 3.05 + i * 0.152],
      [1.4, 1.26 + next() * 0.006, 3.197 + i * 0.152],
      material.wood,
      11 + i * 7,
    );
  }
  mesh.colour = [0.18, 0.15, 0.12];
  addBox(mesh, [-1.4, 0.95, 3.02], [1.4, 1.2, 3.07], material.wood, 51);
  const top = addPost(mesh, next, 0.21, 3.32, 1.62, 0.095);
  const grip = 0.0165;
  mesh.colour = [0.4, 0.33, 0.23];
  const rope = [];
  for (let i = 0; i <= 60; i++)
    rope.push([
      -0.75 + (i / 60) * 0.87,
      1.375 + 0.03 * ((i - 30) / 30) ** 2 + 0.012 * (i / 60),
      3.16 + 0.02 * (i / 60) ** 2,
    ]);
  addTube(mesh, rope, (_t, a) => grip * (1 + 0.05 * Math.sin(a * 3)), 24, material.rope);
  for (let ring = 0; ring < 3; ring++) {
    const path = [];
    for (let i = 0; i <= 64; i++) {
      const a = (i / 64) * Math.PI * 2 - 2;
      path.push([
        top[0] - 0.012 + Math.cos(a) * 0.113,
        1.375 + ring * 0.034 + 0.02 * Math.sin(a + ring) + (0.034 * i) / 64,
        top[2] + Math.sin(a) * 0.113,
      ]);
    }
    mesh.colour = [0.4, 0.33, 0.23];
    addTube(mesh, path, (_t, a) => grip * (1 + 0.05 * Math.sin(a * 3)), 20, material.rope);
  }
  const pixelM = 0.84 * pixelAngle;
  const hand = buildHand(Math.min(0.005, Math.max(0.0016, 4 * pixelM)), grip);
  mesh.add(hand, mirroredAcross(placing([-0.17, 1.379, 3.162], Math.PI + 0.14, 1, -0.42)));
  mesh.add(hand, placing([-0.36, 1.387, 3.16], Math.PI - 0.2, 1, -0.36));
  addCoil(mesh, 0.55, 1.262, 3.32, 4, 0.17, grip);
  return {
    mesh,
    water: { ripple: 0.5, body: [0.045, 0.05, 0.03] },
    ...bank,
    centre: [-0.1, 1.35, 3.2],
    reachM: 0.85,
    penumbra: 6,
    overheadSpreadM: 0.1,
    hollowM: 0.06,
  };
}

export function heronScene({ eye, pixelAngle, sees }) {
  const mesh = sceneMesh();
  mesh.add(once('nearBank', nearBank));
  addWater(mesh);
  const at = [0.25, -0.12, 3.4];
  const away = Math.hypot(eye[0] - at[0], eye[1] - 0.7, eye[2] - at[2]);
  mesh.add(buildHeron(away * pixelAngle), placing(at, 0.35));
  const shallow = () => -0.12;
  addReeds(mesh, {
    seed: 341,
    centre: [-2, 5],
    radius: [2.1, 1.1],
    count: 520,
    heightM: 1.75,
    eye,
    pixelAngle,
    baseY: shallow,
  });
  addReeds(mesh, {
    seed: 342,
    centre: [2.6, 5.6],
    radius: [1.8, 1.1],
    count: 420,
    heightM: 1.6,
    eye,
    pixelAngle,
    baseY: shallow,
  });
  addReeds(mesh, {
    seed: 343,
    centre: [-1.5, 2.7],
    radius: [0.6, 0.5],
    count: 70,
    heightM: 1.25,
    eye,
    pixelAngle,
    baseY: shallow,
  });
  addReeds(mesh, {
    seed: 344,
    centre: [1.35, 1.1],
    radius: [0.5, 0.3],
    count: 26,
    heightM: 1.1,
    eye,
    pixelAngle,
    baseY: shallow,
  });
  addFarSide(mesh, sees);
  return {
    mesh,
    water: { ripple: 0.1, body: [0.04, 0.046, 0.028] },
    ...bank,
    centre: [0.1, 0.5, 3.8],
    reachM: 3.2,
    penumbra: 3,
  };
}

export function mistScene({ eye, pixelAngle, sees }) {
  const mesh = sceneMesh();
  mesh.add(once('nearBank', nearBank));
  addWater(mesh);
  mesh.place = placing([7.5, 0, 24], 0.5);
  addFerry(mesh, { awning: false });
  addKeeper(mesh, placing([-4.2, 0.62, 0], Math.PI + 0.6));
  mesh.place = null;
  addOldPosts(
    mesh,
    [
      [-2.2, 7, 1.7],
      [-3.1, 10.5, 1.5],
      [-4, 14, 1.6],
      [-4.9, 18, 1.5],
      [-5.6, 22.5, 1.7],
      [-6.2, 28, 1.4],
      [1.8, 5.4, 1.1],
    ],
    75,
  );
  addReeds(mesh, { seed: 352, centre: [-4.3, 1.4], radius: [2.2, 1.3], count: 520, eye, pixelAngle });
  addReeds(mesh, { seed: 353, centre: [5.3, -0.4], radius: [2.4, 1.1], count: 380, eye, pixelAngle });
  addGrass(mesh, { seed: 354, x0: -9, x1: 9, z0: -9.5, z1: -3, count: 9000, eye, pixelAngle });
  addFarSide(mesh, sees);
  return {
    mesh,
    water: { ripple: 0.05, body: [0.05, 0.052, 0.045] },
    ...bank,
    centre: [2, 1, 12],
    reachM: 16,
    penumbra: 3,
  };
}

export function duskScene({ eye, pixelAngle, sees }) {
  const mesh = sceneMesh();
  mesh.add(once('nearBank', nearBank));
  addWater(mesh);
  addStage(mesh, { x: -3.4, z0: -8, z1: 6 });
  mesh.place = placing([3.2, 0, 11], 0.12);
  addFerry(mesh, { rampUp: [0.6, 1] });
  addKeeper(mesh, placing([-3.6, 0.62, -0.3], Math.PI - 0.9));
  mesh.place = null;
  addReeds(mesh, { seed: 361, centre: [5.2, -1.6], radius: [2.6, 1], count: 520, eye, pixelAngle });
  addOldPosts(
    mesh,
    [
      [7.5, 7, 1.6],
      [9, 9, 1.2],
      [-1, 9, 1.4],
    ],
    76,
  );
  addPebbles(mesh, 362, 1, -3, 6, 1500);
  addGrass(mesh, { seed: 363, x0: -8, x1: 9, z0: -8.5, z1: -3, count: 12000, eye, pixelAngle });
  addFarSide(mesh, sees);
  return {
    mesh,
    water: { ripple: 0.4, body: [0.035, 0.036, 0.03] },
    ...bank,
    centre: [1.5, 1, 5],
    reachM: 12,
    penumbra: 3,
  };
}

export function villageScene({ sees }) {
  const mesh = sceneMesh();
  addWater(mesh);
  addOldPosts(
    mesh,
    [
      [-16, 46, 1.6],
      [-13, 49, 1.2],
      [-9.5, 50, 1.7],
    ],
    77,
  );
  mesh.place = placing([4, 0, 74], 2.5);
  addFerry(mesh);
  mesh.place = null;
  addFarSide(mesh, sees);
  return {
    mesh,
    water: { ripple: 0.35, body: [0.045, 0.05, 0.034] },
    bedHeight: groundHeight,
    bedColour: bank.bedColour,
    centre: [-6, 5, farShoreZ + 20],
    reachM: 48,
    penumbra: 1.8,
    overheadSpreadM: 1.6,
  };
}

export function rainScene({ eye, pixelAngle, sees }) {
  const mesh = sceneMesh();
  mesh.add(once('nearBank', nearBank));
  addWater(mesh);
  mesh.place = placing([-1.2, 0, 5.2], -0.5);
  addFerry(mesh, { awning: false, rampUp: [0.7, 0.25] });
  addAwning(mesh, {
    x1: 5,
    y0: 2.78,
    y1: 2.66,
    sag: 0.17,
    stripes: false,
    tones: [
      [0.5, 0.45, 0.33],
      [0.5, 0.45, 0.33],
    ],
  });
  addKeeper(mesh, placing([3.3, 0.62, -0.55], Math.PI - 0.2));
  mesh.place = null;
  addOldPosts(
    mesh,
    [
      [4.2, 1.3, 1.6],
      [5.5, 3, 1.3],
      [6.8, 5.2, 1.5],
    ],
    78,
  );
  addReeds(mesh, {
    seed: 371,
    centre: [7.4, 0.4],
    radius: [2.4, 1.2],
    count: 420,
    eye,
    pixelAngle,
    heightM: 1.7,
  });
  addFarSide(mesh, sees);
  return {
    mesh,
    water: { ripple: 0.22, body: [0.05, 0.054, 0.042], rain: 1 },
    ...bank,
    centre: [0, 1, 4],
    reachM: 9,
    penumbra: 4,
  };
}
