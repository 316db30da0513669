import { join } from 'node:path';
import { type LookName, lookCaption } from '../../../core/presets/lookName.ts';
import { placeFrame } from '../../../core/print/printPlan.ts';
import { figureWords } from '../../../core/proof/captionWords.ts';
import { lying, papers, readPaper } from '../../../core/proof/paper.ts';
import { parametersWithMatch } from '../../../core/series/frameMatch.ts';
import { lookOfFrame, type SeriesLook } from '../../../core/series/seriesDocument.ts';
import type { ProofSource } from '../../proof/proofSource.ts';
import { lookNamer } from '../../store/lookNames.ts';
import type { CheckedInput } from '../api/commandSchemas.ts';
import type { FrameView, ProofMade } from '../api/seriesCommands.ts';
import type { HostState } from '../host.ts';
import { firstFree } from '../placeFile.ts';
import { Refusal } from '../refusal.ts';
import type { RunningCall } from '../runningCalls.ts';
import { checkFileName } from '../savePainting.ts';
import type { WallSeries } from './wallSeries.ts';

const marginMm = 14;

/**
 * Sets the frames of a series on a proof sheet, matched as on the Wall.
 * @throws Refusal where paper and columns do not go together; FileError where the sheet cannot be written
 */
export async function makeSeriesProof(
  series: WallSeries,
  input: CheckedInput<'makeProof'>,
  call: RunningCall,
  { parts, grants, events, walls }: HostState,
): Promise<ProofMade> {
  const paper = readPaper(input.paper);
  if (!paper)
    throw new Refusal(
      'BadRequest',
      `${input.paper} is no paper.`,
      `Use ${Object.keys(papers).join(', ')}, or a size in millimetres such as 200x250.`,
    );
  const folder = grants.checkWriting(input.folder);
  const name = checkFileName(input.name.replace(/\.(pdf|png)$/i, ''));
  const out = await firstFree(join(folder, `${name}.${input.format}`));
  const [{ ProofPainter }, { makeProof }] = await Promise.all([
    import('../../proof/proofPainter.ts'),
    import('../../proof/makeProof.ts'),
  ]);
  const painter = new ProofPainter(undefined, parts.loadEngine());
  const nameOf = await lookNamer((await parts.loadStores()).presets);
  const frames = series.view().frames.filter(({ frameId }) => !series.settings.leftOut.includes(frameId));
  const { cropFrame: crop, trimMarks = false } = series.settings.output;
  const sources = frames.map((frame): ProofSource => {
    const { frameId, path } = frame;
    const { widthPx, heightPx } = crop && frame.widthPx > 0 ? placeFrame(frame, crop) : frame;
    const caption = captionOf(frame, series, nameOf);
    if (widthPx === 0) return { picture: { path }, caption };
    return {
      caption,
      picture: {
        path,
        widthPx,
        heightPx,
        paint: async (needed, signal) => {
          const order = series.pictureOrder(frameId);
          const match = await order.match((photo) => walls.pictures.paletteOf(photo));
          const parameters = parametersWithMatch(order.parameters, match);
          const look = { parameters, printLongEdgeMm: order.printLongEdgeMm, crop, toneMap: match.toneMap };
          return painter.paint(path, look, needed, signal);
        },
      },
    };
  });
  const { title, columns } = input;
  const order = {
    out,
    paper: input.landscape ? lying(paper) : paper,
    columns,
    marginMm,
    title,
    date: new Date(),
    trimMarks,
  };
  try {
    const made = await makeProof(sources, order, {
      signal: call.signal,
      onProgress: (fraction01) => events.send('progress', { callId: call.id, fraction01, stage: 'proof' }),
    });
    const remarks = [...made.faults.map(({ message }) => message), ...made.remarks];
    return { files: made.files, folder, pages: made.pages, frames: made.frames, remarks };
  } catch (failure) {
    if (failure instanceof RangeError)
      throw new Refusal('BadRequest', `${failure.message}.`, 'Choose fewer columns or larger paper.');
    throw failure;
  }
}

function captionOf(frame: FrameView, series: WallSeries, nameOf: (look: SeriesLook) => LookName) {
  const { measured, odd } = frame;
  const look = lookOfFrame(series.settings, frame.frameId);
  const figures = measured ? [figureWords(measured)] : [];
  return {
    name: frame.frameId,
    preset: lookCaption(nameOf(look)),
    figures,
    note: odd && !odd.isMatched ? odd.reason : '',
  };
}
