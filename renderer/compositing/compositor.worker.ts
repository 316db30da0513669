/**
 * Holds the strata and draws the picture and the Section, away from the window's own thread. Scenes that arrive
 * while one is being drawn replace each other: only the latest is drawn.
 */
import { type Composer, createComposer } from './composer.ts';
import { drawPicture, drawSection } from './drawScene.ts';
import { Hatching } from './hatching.ts';
import type { FromCompositor, PaintedPiece, PieceSlot, Scene, SceneSide, ToCompositor } from './messages.ts';
import { OutsideMarker } from './outsideMarker.ts';
import { PictureSheet } from './pictureSheet.ts';

/** What a dedicated worker's global scope has and the DOM's types know as a window's. */
const scope = self as unknown as {
  postMessage(message: FromCompositor, transfer: Transferable[]): void;
  requestAnimationFrame(draw: () => void): number;
  onmessage: ((event: MessageEvent<ToCompositor>) => void) | null;
};
const tell = (message: FromCompositor, transfer: Transferable[] = []) => scope.postMessage(message, transfer);

const ready: Promise<Composer> = createComposer();
const sheets: Record<SceneSide, Partial<Record<PieceSlot, PictureSheet>>> = { easel: {}, left: {} };
let pictureContext: OffscreenCanvasRenderingContext2D | null = null;
let sectionContext: OffscreenCanvasRenderingContext2D | null = null;
const marker = new OutsideMarker(() => drawSoon());
const hatching = new Hatching(marker);
let toldShare: number | null = null;
let scene: Scene | null = null;
let isAwaitingFrame = false;

function drawSoon(): void {
  if (isAwaitingFrame) return;
  isAwaitingFrame = true;
  scope.requestAnimationFrame(() => {
    isAwaitingFrame = false;
    draw();
  });
}

function draw(): void {
  if (!scene || !pictureContext || !sectionContext) return;
  const startMs = performance.now();
  const drawn = shownOf('easel', scene.shown);
  const left = scene.left && scene.split01 !== null ? shownOf('left', scene.left.shown) : null;
  let composed = false;
  for (const sheet of drawn) if (!scene.bare && sheet.composePaint(scene.parameters)) composed = true;
  for (const sheet of left ?? [])
    if (!scene.bare && sheet.composePaint(scene.left!.parameters)) composed = true;
  drawPicture(pictureContext, scene, drawn, left);
  hatching.draw(pictureContext, scene, drawn, left);
  drawSection(sectionContext, scene, drawn);
  tell({ kind: 'drawn', sceneId: scene.id, frameMs: performance.now() - startMs, composed });
  if (!scene.bare) seeToMarks(scene, drawn, left);
}

function seeToMarks(
  { parameters, left: leftScene, crop }: Scene,
  drawn: readonly PictureSheet[],
  left: readonly PictureSheet[] | null,
): void {
  marker.consider([
    ...drawn.map((sheet) => ({ sheet, parameters })),
    ...(left ?? []).map((sheet) => ({ sheet, parameters: leftScene!.parameters })),
  ]);
  // The lowest sheet is the one of the whole picture.
  const share01 = drawn[0] ? marker.shareOf({ sheet: drawn[0], parameters }, crop) : null;
  // While a new one is being found the old one stands.
  if (share01 === null || share01 === toldShare) return;
  toldShare = share01;
  tell({ kind: 'outside', share01 });
}

function shownOf(side: SceneSide, slots: readonly PieceSlot[]): PictureSheet[] {
  return slots.map((slot) => sheets[side][slot]).filter((sheet) => sheet !== undefined);
}

function replaceSheet(side: SceneSide, slot: PieceSlot, piece: PaintedPiece, composer: Composer): void {
  const old = sheets[side][slot];
  const ground = piece.strata.ground ?? old?.held.strata.ground;
  if (!ground) throw new Error('A piece came without its ground, and none was held.');
  // The ground may lie in the old sheet's memory: that is given back last.
  sheets[side][slot] = new PictureSheet(piece, { ...piece.strata, ground }, composer, old);
  putAway(old);
  // All is copied: the window may read the next piece into the same memory.
  const { buffer } = piece.strata.body;
  if (buffer instanceof ArrayBuffer) tell({ kind: 'spent', buffer }, [buffer]);
}

function dropSheet(side: SceneSide, slot: PieceSlot): void {
  putAway(sheets[side][slot]);
  delete sheets[side][slot];
}

function putAway(sheet: PictureSheet | undefined): void {
  if (!sheet) return;
  marker.forget(sheet);
  sheet.release();
}

// Messages that come before the kernels are loaded wait for them, in order.
scope.onmessage = ({ data }: MessageEvent<ToCompositor>) => {
  ready
    .then((composer) => take(data, composer))
    .catch((error) =>
      tell({ kind: 'failed', message: error instanceof Error ? error.message : String(error) }),
    );
};

function take(message: ToCompositor, composer: Composer): void {
  switch (message.kind) {
    case 'start':
      pictureContext = message.picture.getContext('2d', { colorSpace: message.space });
      sectionContext = message.section.getContext('2d', { colorSpace: message.space });
      tell({ kind: 'ready' });
      return;
    case 'piece':
      replaceSheet(message.side, message.slot, message.piece, composer);
      drawSoon();
      return;
    case 'dropPiece':
      dropSheet(message.side, message.slot);
      drawSoon();
      return;
    case 'screen':
      composer.setWayToScreen(message.way);
      for (const side of Object.values(sheets)) for (const sheet of Object.values(side)) sheet.colourAgain();
      drawSoon();
      return;
    case 'gamut':
      marker.setTable(message.table);
      toldShare = null;
      drawSoon();
      return;
    case 'scene':
      scene = message.scene;
      drawSoon();
      return;
  }
}
