import type { Page } from 'playwright-core';

/** Pixels read back from the window's own canvas. */
export interface WindowPixels {
  widthPx: number;
  heightPx: number;
  /** R, G, B, A. */
  data: Uint8Array;
}

/** Waits until what was last asked for has been drawn: two frames of the window and one of the worker. */
export async function drawn(page: Page): Promise<void> {
  await page.evaluate(
    () =>
      new Promise<void>((resolve) => {
        requestAnimationFrame(() => requestAnimationFrame(() => requestAnimationFrame(() => resolve())));
      }),
  );
}

/** Reads the picture's or the Section's canvas as it stands, as numbers of that space. */
export async function readCanvas(
  page: Page,
  which: 'stage' | 'section',
  space: PredefinedColorSpace = 'srgb',
): Promise<WindowPixels> {
  await drawn(page);
  const read = await page.evaluate(
    ([selector, colorSpace]) => {
      const shown = document.querySelector<HTMLCanvasElement>(selector)!;
      const copy = document.createElement('canvas');
      copy.width = shown.width;
      copy.height = shown.height;
      const context = copy.getContext('2d', {
        willReadFrequently: true,
        colorSpace: colorSpace as PredefinedColorSpace,
      })!;
      context.drawImage(shown, 0, 0);
      const { data } = context.getImageData(0, 0, copy.width, copy.height);
      let text = '';
      for (let at = 0; at < data.length; at += 0x8000)
        text += String.fromCharCode(...data.subarray(at, at + 0x8000));
      return { widthPx: copy.width, heightPx: copy.height, text: btoa(text) };
    },
    [`.${which}-canvas canvas`, space],
  );
  return {
    widthPx: read.widthPx,
    heightPx: read.heightPx,
    data: new Uint8Array(Buffer.from(read.text, 'base64')),
  };
}

export function pixelAt({ data, widthPx }: WindowPixels, x: number, y: number): number[] {
  const at = (y * widthPx + x) * 4;
  return [...data.subarray(at, at + 4)];
}

/** Where the picture stands on the stage, found from its own pixels: everything else is transparent. */
export function opaqueBox({ data, widthPx, heightPx }: WindowPixels) {
  let left = widthPx;
  let top = heightPx;
  let right = 0;
  let bottom = 0;
  for (let y = 0; y < heightPx; y++)
    for (let x = 0; x < widthPx; x++)
      if (data[(y * widthPx + x) * 4 + 3] > 0) {
        left = Math.min(left, x);
        right = Math.max(right, x + 1);
        top = Math.min(top, y);
        bottom = Math.max(bottom, y + 1);
      }
  return { left, top, right, bottom };
}

export function countDifferent(a: WindowPixels, b: WindowPixels): number {
  let different = 0;
  for (let at = 0; at < a.data.length; at += 4)
    if (a.data[at] !== b.data[at] || a.data[at + 1] !== b.data[at + 1] || a.data[at + 2] !== b.data[at + 2])
      different += 1;
  return different;
}
