import { useCallback, useRef } from 'react';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { compositor } from '../compositing/compositor.ts';
import type { Look } from '../state/lookStore.ts';
import { comparisonStore } from '../state/memoryStore.ts';
import { useStore } from '../state/store.ts';
import { ComparePage } from '../states/ComparePage.tsx';
import { Panel } from './Panel.tsx';
import { Section } from './Section.tsx';
import { Stage } from './Stage.tsx';

/** The two canvases live as long as the window: once handed to the worker they cannot be had back. */
const canvases = { picture: makeCanvas('Painted picture'), section: makeCanvas('Bands of the strata') };
let areHandedOver = false;

function makeCanvas(name: string): HTMLCanvasElement {
  const canvas = document.createElement('canvas');
  canvas.setAttribute('role', 'img');
  canvas.setAttribute('aria-label', name);
  return canvas;
}

function handOver(): void {
  if (areHandedOver) return;
  areHandedOver = true;
  compositor.start(
    canvases.picture.transferControlToOffscreen(),
    canvases.section.transferControlToOffscreen(),
  );
}

/** One photo being worked: picture, Section, controls. */
export function Easel({ photo, look }: { photo: OpenedPhoto; look: Look }) {
  const comparison = useStore(comparisonStore);
  const room = useRef<HTMLElement>(null);
  const holdPicture = useCallback((element: HTMLDivElement | null) => {
    handOver();
    element?.replaceChildren(canvases.picture);
  }, []);
  const holdSection = useCallback((element: HTMLDivElement | null) => {
    handOver();
    element?.replaceChildren(canvases.section);
  }, []);
  return (
    <main className="easel" ref={room}>
      <Stage photo={photo} canvasHost={holdPicture} />
      <Section photo={photo} look={look} canvasHost={holdSection} />
      {comparison ? (
        <ComparePage key={JSON.stringify([comparison.left, comparison.right])} comparison={comparison} />
      ) : (
        <Panel photo={photo} look={look} />
      )}
    </main>
  );
}
