import type {
  FromCompositor,
  PaintedPiece,
  PieceSlot,
  Scene,
  SceneSide,
  ToCompositor,
  WayToScreen,
} from './messages.ts';

/** How long a frame took; also sent to the window as an event, so that it can be measured from outside. */
export interface FrameTime {
  sceneId: number;
  frameMs: number;
  composed: boolean;
  /** From handing the scene over to its being drawn. */
  latencyMs: number;
}

/** One for each slot, and one more on its way. */
const spentKept = 4;

/** A canvas keeps its space: that of the screen the window was opened on. */
export const canvasSpace: PredefinedColorSpace =
  typeof matchMedia !== 'undefined' && matchMedia('(color-gamut: p3)').matches ? 'display-p3' : 'srgb';

/** The window's end of the compositing worker. */
export class CompositorClient {
  private readonly worker = new Worker(new URL('./compositor.worker.ts', import.meta.url), {
    type: 'module',
  });
  private readonly sentAtMs = new Map<number, number>();
  private spent: ArrayBuffer[] = [];
  private nextSceneId = 1;
  onFailure: (message: string) => void = () => {};
  /** Called when the share of the picture that print cannot show is found, or is another. */
  onOutside: (share01: number | null) => void = () => {};

  constructor() {
    this.worker.onmessage = ({ data }: MessageEvent<FromCompositor>) => this.take(data);
    this.worker.onerror = (event) => this.onFailure(event.message || 'The picture cannot be drawn.');
  }

  start(picture: OffscreenCanvas, section: OffscreenCanvas): void {
    this.send({ kind: 'start', picture, section, space: canvasSpace }, [picture, section]);
  }

  setPiece(side: SceneSide, slot: PieceSlot, piece: PaintedPiece): void {
    this.send({ kind: 'piece', side, slot, piece }, buffersOf(piece));
  }

  dropPiece(side: SceneSide, slot: PieceSlot): void {
    this.send({ kind: 'dropPiece', side, slot });
  }

  /** For all pieces of the photo on the easel, those that are held and those that come. */
  setWayToScreen(way: WayToScreen): void {
    this.send({ kind: 'screen', way });
  }

  /** See `readGamutTable`; null marks nothing. */
  setGamutTable(table: Uint16Array | null): void {
    this.send({ kind: 'gamut', table });
  }

  show(scene: Omit<Scene, 'id'>): number {
    const id = this.nextSceneId++;
    this.sentAtMs.set(id, performance.now());
    this.send({ kind: 'scene', scene: { ...scene, id } });
    return id;
  }

  private send(message: ToCompositor, transfer: Transferable[] = []): void {
    this.worker.postMessage(message, transfer);
  }

  /** Memory to read a piece into: what an earlier one came in, where it is not much too large. */
  readonly makeRoom = (lengthBytes: number): ArrayBuffer => {
    const index = this.spent.findIndex(
      ({ byteLength }) => byteLength >= lengthBytes && byteLength <= lengthBytes * 1.5 + 4096,
    );
    return index < 0 ? new ArrayBuffer(lengthBytes) : this.spent.splice(index, 1)[0];
  };

  private take(message: FromCompositor): void {
    if (message.kind === 'failed') this.onFailure(message.message);
    if (message.kind === 'outside') this.onOutside(message.share01);
    if (message.kind === 'spent') this.spent = [message.buffer, ...this.spent].slice(0, spentKept);
    if (message.kind === 'drawn') {
      const sentAtMs = this.sentAtMs.get(message.sceneId) ?? performance.now();
      for (const id of this.sentAtMs.keys()) if (id <= message.sceneId) this.sentAtMs.delete(id);
      const time: FrameTime = { ...message, latencyMs: performance.now() - sentAtMs };
      window.dispatchEvent(new CustomEvent('oxgall:frame', { detail: time }));
    }
  }
}

function buffersOf(piece: PaintedPiece): Transferable[] {
  const { ground, body, line, relief } = piece.strata;
  const buffers = [ground?.buffer, body.buffer, line.buffer, relief?.buffer].filter(
    (buffer) => buffer instanceof ArrayBuffer,
  );
  return [...new Set(buffers)];
}
