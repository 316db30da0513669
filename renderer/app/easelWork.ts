/** Ties the stores to the compositor and to the painting: one photo on one easel. */
import { compositor } from '../compositing/compositor.ts';
import { fitMargin, gutterLeftPx, gutterRightPx, sectionMeasures } from '../easel/stageMeasures.ts';
import { bandSpan, layOutSection } from '../geometry/sectionLayout.ts';
import { type PlacedView, placeView } from '../geometry/viewTransform.ts';
import { PaintDirector } from '../painting/paintDirector.ts';
import { forgetPresetPictures, paintPresetPictures } from '../presets/presetPictures.ts';
import { planOf, wholeLongEdgeMm } from '../print/printMeasures.ts';
import { gamutStore } from '../state/gamutStore.ts';
import { currentLook, type Look, lookStore, strataBottomUp, strengthOf } from '../state/lookStore.ts';
import { comparisonStore } from '../state/memoryStore.ts';
import { outputStore } from '../state/outputStore.ts';
import { paintStore } from '../state/paintStore.ts';
import { photoStore, sessionStore } from '../state/photoStore.ts';
import { placedViewStore, type ViewState, viewStore } from '../state/viewStore.ts';
import { lookOfSide } from '../states/comparing.ts';
import { currentOutput } from './outputWork.ts';

export const director = new PaintDirector(compositor);
/** Paints what is compared with the easel; idle while nothing is. */
const leftDirector = new PaintDirector(compositor, 'left');

/** The bands as they stand for a look, in device pixels. */
export function placeBands(look: Look, view: ViewState) {
  return layOutSection(
    strataBottomUp.map((stratum) => ({ stratum, strength01: strengthOf(look.parameters, stratum) })),
    sectionMeasures(view.sectionHeightPx, view.devicePixelRatio),
  );
}

/** The sides of the bands on the stage, in device pixels. */
export function placeBandSpan(placed: PlacedView, view: ViewState) {
  return bandSpan(placed, photoStore.get()!, view.stage.widthPx, {
    leftPx: Math.round(gutterLeftPx * view.devicePixelRatio),
    rightPx: Math.round(gutterRightPx * view.devicePixelRatio),
  });
}

/** What stands on the easel: the look at hand, or the right one of two that are compared. */
function easelLook(): Look | null {
  const compared = comparisonStore.get();
  return compared ? lookOfSide(compared.right) : currentLook();
}

/** The look with the whole photo's length on paper, as what is asked of the engine means it. */
function atPrintScale(look: Look | null): Look | null {
  const photo = photoStore.get();
  if (!photo || !look) return look;
  const output = { ...currentOutput(), printLongEdgeMm: look.printLongEdgeMm };
  return output.cropFrame ? { ...look, printLongEdgeMm: wholeLongEdgeMm(photo, output) } : look;
}

let isSceneAwaited = false;

function showSoon(): void {
  if (isSceneAwaited) return;
  isSceneAwaited = true;
  requestAnimationFrame(() => {
    isSceneAwaited = false;
    showScene();
  });
}

function showScene(): void {
  const photo = photoStore.get();
  const look = easelLook();
  const view = viewStore.get();
  const compared = comparisonStore.get();
  const leftLook = compared && lookOfSide(compared.left);
  const placed = placedViewStore.get();
  const gamut = gamutStore.get();
  if (!photo || !look || !placed || view.stage.widthPx === 0) return;
  compositor.show({
    photo: { widthPx: photo.widthPx, heightPx: photo.heightPx },
    stage: view.stage,
    section: {
      widthPx: view.stage.widthPx,
      heightPx: Math.round(view.sectionHeightPx * view.devicePixelRatio),
    },
    view: placed,
    parameters: look.parameters,
    bare: view.bare,
    split01: view.split01,
    cut01: view.cut01,
    bands: placeBands(look, view),
    bandSpan: placeBandSpan(placed, view),
    shown: director.shown,
    left: leftLook && { parameters: leftLook.parameters, shown: leftDirector.shown },
    hatchRatio: gamut.isMarked && gamut.isKnown ? view.devicePixelRatio : null,
    crop: planOf(photo, currentOutput()).crop,
  });
}

function placeStage(): void {
  const photo = photoStore.get();
  const view = viewStore.get();
  if (!photo || view.stage.widthPx === 0) {
    placedViewStore.set(null);
    return;
  }
  const next = placeView(view.intent, photo, view.stage, fitMargin(view.devicePixelRatio));
  const last = placedViewStore.get();
  const isSame =
    last?.scale === next.scale && last.originXPx === next.originXPx && last.originYPx === next.originYPx;
  if (!isSame) placedViewStore.set(next);
  const stageView = { view: next, stage: view.stage, devicePixelRatio: view.devicePixelRatio };
  director.setStageView(stageView);
  leftDirector.setStageView(stageView);
}

/** Starts the work; called once. */
export function startEaselWork(): void {
  compositor.onFailure = (message) =>
    paintStore.update((state) => ({
      ...state,
      trouble: { message, remedy: 'Close the window and open it again; your changes are kept.' },
    }));
  director.onShown = showSoon;
  leftDirector.onShown = showSoon;
  const paintSmall = () => {
    const photo = photoStore.get();
    if (photo) paintPresetPictures(photo.photoId, atPrintScale(currentLook())?.printLongEdgeMm);
  };
  director.onSettled = paintSmall;
  // A preset that was just made has no picture yet.
  sessionStore.subscribe(() => {
    if (paintStore.get().busy === 'no') paintSmall();
  });
  let lastPhotoId: string | undefined;
  photoStore.subscribe(() => {
    const photo = photoStore.get();
    if (photo?.photoId !== lastPhotoId) forgetPresetPictures();
    lastPhotoId = photo?.photoId;
    placeStage();
    director.setPhoto(photo);
    showSoon();
  });
  const layLooks = () => {
    const compared = comparisonStore.get();
    director.setLook(atPrintScale(easelLook()));
    leftDirector.setPhoto(compared ? photoStore.get() : null);
    leftDirector.setLook(atPrintScale(compared && lookOfSide(compared.left)));
    showSoon();
  };
  lookStore.subscribe(layLooks);
  // A crop makes more of the paper's length of each pixel, and so its strokes wider on the photo.
  outputStore.subscribe(layLooks);
  comparisonStore.subscribe(layLooks);
  gamutStore.subscribe(showSoon);
  viewStore.subscribe(() => {
    placeStage();
    showSoon();
  });
}
