import { throughTable } from '../../core/colour/colourTable.ts';
import { encodeFrame } from '../../core/hostProtocol/frame.ts';
import { parseParameters } from '../../core/parameters/parse.ts';
import type { Rect, Strata } from '../../core/pixels/photo.ts';
import type { CheckedInput } from './api/commandSchemas.ts';
import type {
  GamutTableHeader,
  ScreenTableHeader,
  SmallPictureHeader,
  StrataHeader,
} from './api/hostCommands.ts';
import type { HostParts } from './hostParts.ts';
import { clipRegion, coarserRegion, parametersForReduced } from './levels.ts';
import type { OpenPhoto } from './openPhoto.ts';
import { Refusal } from './refusal.ts';
import type { RunningCall, RunningCalls } from './runningCalls.ts';
import type { ScreenTables } from './screenTables.ts';
import { SmallPictureTurns } from './smallPictureTurns.ts';

/** A rough picture has no more pixels than this: it must be there within a blink on two cores. */
const roughPixels = 200_000;

/** Strata and small pictures, painted and packed into frames. */
export class PaintCommands {
  readonly #turns = new SmallPictureTurns();

  constructor(
    private readonly parts: Pick<HostParts, 'loadEngine' | 'loadFiles' | 'loadComposeSmall'>,
    private readonly calls: RunningCalls,
    private readonly screenTables: ScreenTables,
  ) {}

  /** See `HostCommands.readScreenTable`. */
  async readScreenTable(
    photo: OpenPhoto,
    { screen = 'srgb' }: CheckedInput<'readScreenTable'>,
  ): Promise<Uint8Array<ArrayBuffer>> {
    const { table, space } = await this.screenTables.wayTo(photo.path, screen);
    const header: ScreenTableHeader = { photoId: photo.photoId, space };
    return encodeFrame(header, table ? { table } : {});
  }

  /** See `HostCommands.readGamutTable`. @param profile a file's path was checked */
  async readGamutTable(
    photo: OpenPhoto,
    { profile }: CheckedInput<'readGamutTable'>,
  ): Promise<Uint8Array<ArrayBuffer>> {
    const files = await this.parts.loadFiles();
    const table = await files.readGamutTable(photo.path, profile);
    return encodeFrame({ photoId: photo.photoId } satisfies GamutTableHeader, table ? { table } : {});
  }

  /**
   * Paints a level, or a region of it, as a frame of strata.
   * @throws Refusal `Superseded` as soon as a newer call takes the same view
   */
  async paintStrata(
    photo: OpenPhoto,
    input: CheckedInput<'paintStrata'>,
    call: RunningCall,
  ): Promise<Uint8Array<ArrayBuffer>> {
    const parameters = parseParameters(input.parameters);
    this.calls.takePlace(`strata ${photo.photoId} ${input.view}`, call);
    const engine = await this.parts.loadEngine();
    const started = performance.now();
    const where = chooseWhere(photo, input);
    return photo.paint(where.level, call.signal, (source, signal) =>
      this.#turns.paintView(async () => {
        const { strata } = await engine.paintStrata(
          source.enginePhoto,
          parametersForReduced(parameters, source.fromLevel, source.enginePhoto.noiseFloor),
          { level: where.level - source.fromLevel, region: where.asked },
          { signal, printLongEdgeMm: input.printLongEdgeMm },
        );
        signal.throwIfAborted();
        const header: StrataHeader = {
          photoId: photo.photoId,
          askedLevel: input.level,
          level: where.level,
          levelWidthPx: photo.levels[where.level].widthPx,
          levelHeightPx: photo.levels[where.level].heightPx,
          region: where.region,
          rough: input.rough ?? false,
          source: source.kind,
          groundChannels: strata.groundChannels,
          groundDepth: strata.ground instanceof Uint16Array ? 16 : 8,
          paintMs: Math.round(performance.now() - started),
        };
        return encodeFrame(header, planesOf(strata, input.omit ?? []));
      }),
    );
  }

  /** Paints and composes a picture of a few hundred pixels; such pictures wait while a view is painted. */
  async paintSmallPicture(
    photo: OpenPhoto,
    input: CheckedInput<'paintSmallPicture'>,
    call: RunningCall,
  ): Promise<Uint8Array<ArrayBuffer>> {
    if (input.view) this.calls.takePlace(`small ${photo.photoId} ${input.view}`, call);
    const parameters = parseParameters(input.parameters);
    const [engine, compose] = await Promise.all([this.parts.loadEngine(), this.parts.loadComposeSmall()]);
    const level = levelForLongEdge(photo, input.longEdgePx);
    return this.#turns.paintSmall(call.signal, () =>
      photo.paint(level, call.signal, async (source, signal) => {
        const { strata } = await engine.paintStrata(
          source.enginePhoto,
          parametersForReduced(parameters, source.fromLevel, source.enginePhoto.noiseFloor),
          { level: level - source.fromLevel },
          { signal, printLongEdgeMm: input.printLongEdgeMm },
        );
        signal.throwIfAborted();
        const { widthPx, heightPx } = strata;
        const header: SmallPictureHeader = {
          photoId: photo.photoId,
          widthPx,
          heightPx,
          source: source.kind,
        };
        const rgba = await compose(strata, parameters);
        const table = await this.screenTables.of(photo.path);
        if (table) throughTable(rgba, table);
        return encodeFrame(header, { rgba });
      }),
    );
  }
}

/** Which level and region are painted for what was asked. */
function chooseWhere(
  photo: OpenPhoto,
  input: CheckedInput<'paintStrata'>,
): { level: number; region: Rect; asked: Rect | undefined } {
  const { levels } = photo;
  if (input.level >= levels.length)
    throw new Refusal(
      'BadRequest',
      `Expected a level from 0 to ${levels.length - 1}, received ${input.level}.`,
    );
  let level = input.level;
  let region = clipRegion(input.region, levels[level]);
  if (input.rough) {
    while (level + 1 < levels.length && region.widthPx * region.heightPx > roughPixels) {
      level += 1;
      region = coarserRegion(region, 1, levels[level]);
    }
  }
  const { widthPx, heightPx } = levels[level];
  const isWhole = region.widthPx === widthPx && region.heightPx === heightPx;
  return { level, region, asked: isWhole ? undefined : region };
}

function planesOf(strata: Strata, omit: readonly string[]): Record<string, Uint8Array | Uint16Array> {
  const { ground, body, line, relief } = strata;
  const planes = { ground, body, line, ...(relief && { relief }) };
  return Object.fromEntries(Object.entries(planes).filter(([name]) => !omit.includes(name)));
}

/** The coarsest level whose long edge is no shorter than asked. */
function levelForLongEdge(photo: OpenPhoto, longEdgePx: number): number {
  const tooSmall = photo.levels.findIndex(
    ({ widthPx, heightPx }) => Math.max(widthPx, heightPx) < longEdgePx,
  );
  return Math.max(0, (tooSmall < 0 ? photo.levels.length : tooSmall) - 1);
}
