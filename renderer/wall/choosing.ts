import { chosenStore, comparedStore, nothingChosen, seriesStore } from './wallStore.ts';

/** How a click or key chooses: alone, in addition, or everything from the anchor on. */
export type ChoosingWay = 'alone' | 'toggle' | 'stretch' | 'walk';

/** Chooses a frame; `walk` only moves the keys to it. */
export function choose(frameId: string, way: ChoosingWay): void {
  chosenStore.update((chosen) => {
    if (way === 'walk') return { ...chosen, at: frameId };
    if (way === 'alone') return { frameIds: new Set([frameId]), anchor: frameId, at: frameId };
    if (way === 'stretch') {
      const between = stretch(chosen.anchor ?? chosen.at ?? frameId, frameId);
      return { frameIds: new Set(between), anchor: chosen.anchor ?? chosen.at ?? frameId, at: frameId };
    }
    const frameIds = new Set(chosen.frameIds);
    if (!frameIds.delete(frameId)) frameIds.add(frameId);
    return { frameIds, anchor: frameId, at: frameId };
  });
}

function stretch(one: string, other: string): string[] {
  const ids = seriesStore.get()?.frames.map(({ frameId }) => frameId) ?? [];
  const [a, b] = [ids.indexOf(one), ids.indexOf(other)].sort((x, y) => x - y);
  return ids.slice(Math.max(0, a), b + 1);
}

export function chooseAll(): void {
  const ids = seriesStore.get()?.frames.map(({ frameId }) => frameId) ?? [];
  chosenStore.update(({ at }) => ({ frameIds: new Set(ids), anchor: ids[0] ?? null, at }));
}

export function chooseNone(): void {
  chosenStore.update(({ at }) => ({ ...nothingChosen, at }));
}

/** The chosen frames in their order; the one the keys are on where none is chosen. */
export function framesAtHand(): string[] {
  const { frameIds, at } = chosenStore.get();
  if (frameIds.size === 0) return at ? [at] : [];
  const ids = seriesStore.get()?.frames.map(({ frameId }) => frameId) ?? [];
  return ids.filter((frameId) => frameIds.has(frameId));
}

/** Two chosen frames side by side; one is compared with the lead. */
export function compareChosen(lead: string | null): void {
  const hand = framesAtHand();
  const [one, other] = hand.length >= 2 ? hand : [lead, hand[0]];
  if (one && other && one !== other) comparedStore.set([one, other]);
}
