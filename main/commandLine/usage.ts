/** The words of a command were off: exit code 2. */
export class UsageError extends Error {
  override readonly name = 'UsageError';
}

/** What ends a command, by exit code. */
export const exitCode = { done: 0, failed: 1, usage: 2 } as const;

/** One command of the program. */
export interface Command {
  name: string;
  /** The words after the program's name, as shown in help. */
  usage: string;
  summary: string;
  /** Options with their meaning, in the order of the help. */
  options: readonly (readonly [option: string, meaning: string])[];
  /**
   * @param words what follows the command's name
   * @returns the exit code
   * @throws UsageError where the words are off; FileError, ParameterError where something cannot be used
   */
  run(words: string[]): Promise<number>;
}

/** The help of one command. */
export function describeCommand(command: Command): string {
  const width = Math.max(0, ...command.options.map(([option]) => option.length));
  const options = command.options.map(([option, meaning]) => `  ${option.padEnd(width)}  ${meaning}\n`);
  const list = options.length > 0 ? `\nOptions\n${options.join('')}` : '';
  return `oxgall ${command.usage}\n\n${command.summary}\n${list}`;
}

/** The help of the whole program. */
export function describeProgram(commands: readonly Command[]): string {
  const lines = commands.map((command) => `  oxgall ${command.usage}\n      ${command.summary}\n`);
  return `Oxgall turns photographs into painterly illustrations.\n\n${lines.join('')}\n  oxgall help COMMAND\n      Shows the options of a command.\n`;
}
