/** Work shorter than this shows no progress. */
const quietMs = 1000;
const barWidth = 24;

const stageWords = {
  decode: 'Reading',
  grain: 'Finding the grain',
  body: 'Painting',
  line: 'Inking',
  relief: 'Lighting the surface',
  compose: 'Laying the strata',
  writing: 'Writing',
  series: 'Painting the series',
  proof: 'Setting the sheet',
};

/** A line on the terminal that says how far long work is; says nothing where the output is no terminal. */
export class ProgressLine {
  readonly #startMs = performance.now();
  readonly #isTerminal = process.stderr.isTTY === true;
  #isShown = false;

  /** @param detail goes behind it, such as the time left */
  update(fraction01: number, stage: keyof typeof stageWords, detail = ''): void {
    if (!this.#isTerminal || performance.now() - this.#startMs < quietMs) return;
    const filled = Math.round(fraction01 * barWidth);
    const bar = '━'.repeat(filled) + '·'.repeat(barWidth - filled);
    process.stderr.write(`\r\x1b[2K${bar} ${stageWords[stage]} ${Math.round(fraction01 * 100)} %${detail}`);
    this.#isShown = true;
  }

  clear(): void {
    if (this.#isShown) process.stderr.write('\r\x1b[2K');
    this.#isShown = false;
  }
}

/** A time that is left, rounded as one would say it. */
export function timeInWords(ms: number): string {
  const seconds = Math.max(1, Math.round(ms / 1000));
  if (seconds < 100) return `${seconds} s`;
  const minutes = Math.round(seconds / 60);
  return minutes < 100 ? `${minutes} min` : `${(minutes / 60).toFixed(1)} h`;
}
