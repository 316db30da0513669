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

  update(fraction01: number, stage: keyof typeof stageWords): void {
    if (!this.#isTerminal || performance.now() - this.#startMs < quietMs) return;
    const filled = Math.round(fraction01 * barWidth);
    const bar = '━'.repeat(filled) + '·'.repeat(barWidth - filled);
    process.stderr.write(`\r\x1b[2K${bar} ${stageWords[stage]} ${Math.round(fraction01 * 100)} %`);
    this.#isShown = true;
  }

  clear(): void {
    if (this.#isShown) process.stderr.write('\r\x1b[2K');
    this.#isShown = false;
  }
}
