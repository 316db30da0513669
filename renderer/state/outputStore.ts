import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import { createStore } from './store.ts';

/**
 * What file to make of the photo on the easel: laid here from its recipe when it is opened, changed here, and told to
 * the host. The print's size is part of the look, which strokes follow and undo returns to: the one here is not read.
 */
export const outputStore = createStore<OutputSettings | null>(null);
