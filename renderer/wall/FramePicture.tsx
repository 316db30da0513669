import { useEffect, useRef, useState } from 'react';
import { pictureShelf } from './pictureShelf.ts';

/** A frame's painted picture; blank paper until it is there. Asks for nothing by itself. */
export function FramePicture({ frameId }: { frameId: string }) {
  const canvas = useRef<HTMLCanvasElement>(null);
  const [isThere, setThere] = useState(() => pictureShelf.picture(frameId) !== null);
  useEffect(() => {
    const draw = () => {
      const picture = pictureShelf.picture(frameId);
      const element = canvas.current;
      if (!picture || !element) return;
      element.width = picture.width;
      element.height = picture.height;
      element.getContext('2d')?.putImageData(picture, 0, 0);
      setThere(true);
    };
    draw();
    return pictureShelf.listen(frameId, draw);
  }, [frameId]);
  return (
    <span aria-hidden="true">
      <canvas ref={canvas} className={isThere ? 'is-there' : ''} />
    </span>
  );
}
