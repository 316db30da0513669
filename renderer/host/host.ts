import { createHostCaller } from '../../core/hostProtocol/hostCaller.ts';
import { HostError } from '../../core/hostProtocol/hostError.ts';
import type { HostCommands } from '../../main/host/api/hostCommands.ts';

/** The host this window talks to, whichever shell serves it. */
export const host = createHostCaller<HostCommands>();

/** Something that went wrong, in the words people read. */
export interface Trouble {
  message: string;
  remedy: string;
}

/** Whether a call ended because it was no longer wanted: nobody needs to hear of it. */
export function isUnwanted(error: unknown): boolean {
  if (error instanceof HostError) return error.kind === 'Superseded' || error.kind === 'Cancelled';
  return error instanceof DOMException && error.name === 'AbortError';
}

export function troubleOf(error: unknown): Trouble {
  if (error instanceof HostError) return { message: error.message, remedy: error.remedy };
  if (error instanceof TypeError)
    return {
      message: 'The painting engine does not answer.',
      remedy: 'Your changes are kept; start Oxgall again to go on.',
    };
  return { message: error instanceof Error ? error.message : String(error), remedy: '' };
}
