import { useEffect, useRef } from 'react';

/** A small painted picture; a blank of its shape until it is there. */
export function SmallPicture({ picture, shape }: { picture: ImageData | undefined; shape: number }) {
  const canvas = useRef<HTMLCanvasElement>(null);
  useEffect(() => {
    if (!canvas.current || !picture) return;
    canvas.current.width = picture.width;
    canvas.current.height = picture.height;
    canvas.current.getContext('2d')?.putImageData(picture, 0, 0);
  }, [picture]);
  return (
    <span
      className="preset-picture"
      aria-hidden="true"
      style={{ aspectRatio: Math.min(1.8, Math.max(0.8, shape)) }}
    >
      <canvas ref={canvas} className={picture ? 'is-there' : ''} />
    </span>
  );
}
