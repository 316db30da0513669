import type { HostEvents } from '../../main/host/api/hostEvents.ts';
import { createStore } from '../state/store.ts';

/** The proof sheet that is being made; null while none is. */
export const proofProgressStore = createStore<{ callId: string; fraction01: number } | null>(null);

/** Progress as the host reports it; of other calls it knows nothing. */
export function takeProofProgress({ callId, fraction01 }: HostEvents['progress']): void {
  proofProgressStore.update((progress) => (progress?.callId === callId ? { callId, fraction01 } : progress));
}
