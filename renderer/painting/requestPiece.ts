import type { Parameters } from '../../core/parameters/table.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import type { StrataHeader } from '../../main/host/api/hostCommands.ts';
import type { PaintedPiece, PieceSlot, SceneSide } from '../compositing/messages.ts';
import { host } from '../host/host.ts';

export interface PieceRequest {
  photoId: string;
  parameters: Parameters;
  printLongEdgeMm: number;
  side: SceneSide;
  slot: PieceSlot;
  level: number;
  region?: Rect;
  /** The compositor already holds this ground in the same slot. */
  omitGround: boolean;
}

export interface ReceivedPiece {
  piece: PaintedPiece;
  header: StrataHeader;
}

/** Asks the host for strata and makes them ready to hand to the compositor. */
export async function requestPiece(
  request: PieceRequest,
  signal: AbortSignal,
  makeRoom: (lengthBytes: number) => ArrayBuffer,
): Promise<ReceivedPiece> {
  const { header, planes } = await host.callForFrame(
    'paintStrata',
    {
      photoId: request.photoId,
      parameters: request.parameters,
      level: request.level,
      region: request.region,
      view: `${request.side}-${request.slot}`,
      rough: request.slot === 'rough',
      omit: request.omitGround ? ['ground'] : undefined,
      printLongEdgeMm: request.printLongEdgeMm,
    },
    { signal, makeRoom },
  );
  const strata: PaintedPiece['strata'] = {
    widthPx: header.region.widthPx,
    heightPx: header.region.heightPx,
    ground: planes.ground ?? null,
    groundChannels: header.groundChannels,
    body: planes.body as Uint16Array,
    line: planes.line as Uint8Array,
    relief: (planes.relief as Uint8Array | undefined) ?? null,
  };
  return { header, piece: { level: header.level, region: header.region, strata } };
}
