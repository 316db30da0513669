import { oddOnesOut } from '../../core/series/oddOnesOut.ts';
import type { FrameResult } from '../series/frameResult.ts';
import type { RunOutcome } from '../series/runSeries.ts';
import type { SeriesTask } from './seriesTask.ts';
import { exitCode } from './usage.ts';

/**
 * Tells what became of a run, frame by frame.
 * @returns the exit code: failed where any frame is not painted
 */
export function reportSeries(asJson: boolean, task: SeriesTask, outcome: RunOutcome, tookMs: number): number {
  const { results } = outcome;
  const count = (state: FrameResult['state']) => results.filter((result) => result.state === state).length;
  const failed = count('failed') + count('waiting');
  const counts = { painted: count('painted'), kept: count('kept'), failed };
  const others = [
    ...task.plan.others,
    ...outcome.gone.map((name) => ({ name, reason: 'This photo is gone; what was painted of it is left.' })),
  ];
  if (asJson) tellJson(task, outcome, others, counts, tookMs);
  else tellWords(task, outcome, others, counts, tookMs);
  return failed > 0 || outcome.stoppedBy ? exitCode.failed : exitCode.done;
}

type Counts = { painted: number; kept: number; failed: number };
type Others = SeriesTask['plan']['others'];

function tellJson(
  { order, plan, remarks }: SeriesTask,
  { results, stoppedBy }: RunOutcome,
  others: Others,
  counts: Counts,
  tookMs: number,
): void {
  const odd = oddByName(results);
  const renamed = new Map(plan.renamed.map(({ name, reason }) => [name, reason]));
  const told = {
    folder: order.folder,
    out: order.outFolder,
    lead: order.amount01 > 0 ? order.lead : null,
    match: order.amount01,
    shard: order.shard && `${order.shard.index}/${order.shard.count}`,
    output: order.output,
    frames: results.map((result) => {
      const why = renamed.get(result.name);
      const said = why && result.state !== 'failed' ? [why, ...result.remarks] : result.remarks;
      return { ...result, remarks: said, odd: odd.get(result.name) ?? null };
    }),
    others,
    ...counts,
    stoppedBy: stoppedBy?.message ?? null,
    remarks,
    milliseconds: Math.round(tookMs),
  };
  process.stdout.write(`${JSON.stringify(told, null, 2)}\n`);
}

function tellWords(
  { order, plan, remarks }: SeriesTask,
  { results, stoppedBy }: RunOutcome,
  others: Others,
  { painted, kept, failed }: Counts,
  tookMs: number,
): void {
  const say = (text: string) => process.stderr.write(`${text}\n`);
  for (const remark of remarks) say(remark);
  for (const { name, reason } of [...others, ...plan.renamed]) say(`${name}: ${reason}`);
  const odd = oddByName(results);
  for (const { name, state, reason, remarks: own } of results) {
    for (const remark of own) say(`${name}: ${remark}`);
    const strange = odd.get(name);
    if (strange) say(`${name}: odd one out. ${strange.reason}`);
    if (state === 'failed') say(`${name}: ${reason}`);
  }
  if (stoppedBy) say(stoppedBy.message);
  const seconds = (tookMs / 1000).toFixed(1);
  process.stdout.write(
    `${order.outFolder}: ${painted} painted, ${kept} kept, ${failed} failed in ${seconds} s\n`,
  );
}

/** Odd ones out by what the photos are like: matched, a wrong light hardly shows any more. */
function oddByName(results: readonly FrameResult[]) {
  const measured = results.filter(({ figures }) => figures !== null);
  const odd = oddOnesOut(measured.map(({ figures }) => figures!.before));
  return new Map(measured.map(({ name }, at) => [name, odd[at]]));
}
