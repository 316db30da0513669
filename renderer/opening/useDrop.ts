import { useEffect, useState } from 'react';
import type { DesktopBridge } from '../../main/host/api/desktopBridge.ts';
import { takeLookOf } from '../app/memoryWork.ts';
import { openPhoto } from '../app/photoWork.ts';
import { importPresets } from '../app/presetWork.ts';
import { dialogStore } from '../state/panelStore.ts';
import { openingStore, photoStore } from '../state/photoStore.ts';

declare global {
  interface Window {
    oxgallDesktop?: DesktopBridge;
  }
}

/** Takes a photograph dropped anywhere on the window. */
export function useDrop(): boolean {
  const [isOver, setOver] = useState(false);
  useEffect(() => {
    const onDragOver = (event: DragEvent) => {
      if (!event.dataTransfer?.types.includes('Files')) return;
      event.preventDefault();
      setOver(true);
    };
    const onDragLeave = (event: DragEvent) => {
      if (event.relatedTarget === null) setOver(false);
    };
    const onDrop = (event: DragEvent) => {
      event.preventDefault();
      setOver(false);
      const file = event.dataTransfer?.files[0];
      if (file) void takeDropped(file);
    };
    window.addEventListener('dragover', onDragOver);
    window.addEventListener('dragleave', onDragLeave);
    window.addEventListener('drop', onDrop);
    return () => {
      window.removeEventListener('dragover', onDragOver);
      window.removeEventListener('dragleave', onDragLeave);
      window.removeEventListener('drop', onDrop);
    };
  }, []);
  return isOver;
}

/** A recipe gives its look to the photo on the easel, a file of presets goes to the shelf, all else is a photo. */
async function takeDropped(file: File): Promise<void> {
  const name = file.name.toLowerCase();
  if (name.endsWith('.oxgall.json') && photoStore.get()) await takeLookOf(file.name, await file.text());
  else if (name.endsWith('.oxgall-presets.json')) await importPresets(file);
  else await openDropped(file);
}

async function openDropped(file: File): Promise<void> {
  const path = await window.oxgallDesktop?.pathOfDropped(file);
  if (path) {
    await openPhoto(path);
    return;
  }
  dialogStore.set('open');
  openingStore.set({
    path: null,
    trouble: {
      message: `A browser window is not told where ${file.name} lies.`,
      remedy: 'Choose it in the list instead.',
    },
  });
}
