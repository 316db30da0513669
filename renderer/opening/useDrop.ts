import { useEffect, useState } from 'react';
import type { DesktopBridge } from '../../main/host/api/desktopBridge.ts';
import { openPhoto } from '../app/photoWork.ts';
import { takeDocument } from '../app/takeDocument.ts';
import { dialogStore } from '../state/panelStore.ts';
import { openingStore } from '../state/photoStore.ts';

declare global {
  interface Window {
    oxgallDesktop?: DesktopBridge;
  }
}

/** Takes a photograph, a recipe or a file of presets dropped anywhere on the window. */
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

async function takeDropped(file: File): Promise<void> {
  if (!(await takeDocument(file))) await openDropped(file);
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
