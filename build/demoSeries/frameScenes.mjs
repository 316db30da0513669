// What stands in front of the camera in each plate.

import { addFarBank, addNearBank, addPebbles, addWater, farShoreZ, groundHeight } from './banks.mjs';
import { addFerry, addRope } from './ferry.mjs';
import { addCoil, addOldPosts, addStage } from './landing.mjs';
import { Mesh, placing } from './mesh.mjs';
import { addGrass, addReeds, addTrees, growTree } from './plants.mjs';
import { randomStream } from './seededNoise.mjs';
import { addVillage } from './village.mjs';

const made = new Map();

/** Parts that several plates share are built once per worker. */
function once(name, build) {
  if (!made.has(name)) made.set(name, build());
  return made.get(name);
}

const treeKinds = () =>
  once('trees', () => [
    growTree(201),
    growTree(202, { spread: 4.4, tall: 8 }),
    growTree(203, { tone: [0.1, 0.11, 0.035], spread: 3 }),
    growTree(204, { tall: 12, spread: 2.2, tone: [0.065, 0.1, 0.04] }),
  ]);

/** Far bank with its village, trees and hills. */
function addFarSide(mesh) {
  const far = once('farSide', () => {
    const part = new Mesh();
    addFarBank(part);
    addVillage(part);
    const next = randomStream(301);
    const places = [];
    for (let i = 0; i < 70; i++) {
      const x = -190 + 380 * next();
      const back = next();
      const z = farShoreZ + 9 + back * 90;
      if (Math.abs(x + 4) < 50 && back < 0.45 && next() < 0.75) continue;
      places.push([x, z, 0.75 + 0.5 * next()]);
    }
    addTrees(part, places, 302, treeKinds());
    return part;
  });
  mesh.add(far);
}

const bank = { bedHeight: groundHeight, bedColour: [0.12, 0.1, 0.065] };

export function landingScene({ eye, pixelAngle }) {
  const mesh = new Mesh();
  addNearBank(mesh);
  addWater(mesh);
  addFarSide(mesh);
  addStage(mesh, { x: 0.6, z0: -9, z1: 5.5 });
  addCoil(mesh, 0.2, 1.21, -2.5);
  mesh.place = placing([6.2, 0, 5.6], 0.32);
  addFerry(mesh);
  mesh.place = null;
  addRope(mesh, [1.8, 1.5, 4.6], [1.3, 0.9, 6.9], 0.15, 0.02);
  addOldPosts(mesh, [[-5, 5, 1.5], [-6.3, 7.2, 1.1], [-4, 8.8, 1.7], [-7.8, 10, 0.8], [11.5, 1.5, 1.3], [13.4, 2.4, 1.6]]);
  addPebbles(mesh, 303, -3, -4, 7, 3000);
  addGrass(mesh, { seed: 304, x0: -16, x1: 14, z0: -14, z1: -3, count: 26000, eye, pixelAngle });
  addReeds(mesh, { seed: 305, centre: [-11, -0.5], radius: [3.4, 2.2], count: 750, eye, pixelAngle });
  addReeds(mesh, { seed: 306, centre: [14, -2.5], radius: [4, 2], count: 650, eye, pixelAngle });
  return { mesh, water: { ripple: 0.45, body: [0.045, 0.05, 0.03] }, ...bank, centre: [2, 1, 2], reachM: 15, penumbra: 2.2 };
}
