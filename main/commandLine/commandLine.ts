#!/usr/bin/env node
import { ParameterError } from '../../core/parameters/parameterError.ts';
import { FileError } from '../files/fileError.ts';
import { discardUnfinished } from '../files/unfinishedFile.ts';
import { compareCommand } from './compareCommand.ts';
import { paintCommand } from './paintCommand.ts';
import { paramsCommand } from './paramsCommand.ts';
import { presetsCommand } from './presetsCommand.ts';
import { proofCommand } from './proofCommand.ts';
import { returnCommand } from './returnCommand.ts';
import { seriesCommand } from './seriesCommand.ts';
import { settingsCommand } from './settingsCommand.ts';
import { statesCommand } from './statesCommand.ts';
import { describeCommand, describeProgram, exitCode, UsageError } from './usage.ts';
import { verifyCommand } from './verifyCommand.ts';
import { workerCommand } from './workerCommand.ts';

const commands = [
  paintCommand,
  statesCommand,
  returnCommand,
  compareCommand,
  verifyCommand,
  seriesCommand,
  workerCommand,
  proofCommand,
  presetsCommand,
  paramsCommand,
  settingsCommand,
];

/**
 * Runs one command.
 * @param words what follows the program's name
 * @returns the exit code
 */
async function runProgram(words: string[]): Promise<number> {
  const [name, ...rest] = words;
  const wantsHelp = name === undefined || name === 'help' || words.includes('--help') || words.includes('-h');
  if (wantsHelp) {
    const about = commands.find((command) => command.name === (name === 'help' ? rest[0] : name));
    process.stdout.write(about ? describeCommand(about) : describeProgram(commands));
    return name === undefined ? exitCode.usage : exitCode.done;
  }
  const command = commands.find((candidate) => candidate.name === name);
  if (!command) {
    const names = commands.map((candidate) => candidate.name).join(', ');
    throw new UsageError(`Expected one of the commands ${names}, received ${name}`);
  }
  return command.run(rest);
}

/** One line for people, whatever went wrong; the exit code says whose fault it was. */
function explain(error: unknown): number {
  const isUsage = error instanceof UsageError || error instanceof ParameterError;
  const isKnown = isUsage || error instanceof FileError;
  const message = error instanceof Error ? error.message : String(error);
  const text = isKnown ? message : `Something went wrong: ${message}`;
  process.stderr.write(`oxgall: ${text.replaceAll(/\s*\n\s*/g, ' ')}\n`);
  return isUsage ? exitCode.usage : exitCode.failed;
}

for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) {
  process.once(signal, () => {
    discardUnfinished();
    // Raised again with its default action: ends at once, without waiting for threads at work.
    process.kill(process.pid, signal);
  });
}
// A reader that went away (a closed pipe) is no reason for a stack trace.
process.stdout.on('error', () => process.exit(exitCode.failed));

try {
  process.exitCode = await runProgram(process.argv.slice(2));
} catch (error) {
  process.exitCode = explain(error);
}
