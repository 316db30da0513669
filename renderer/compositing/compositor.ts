import { CompositorClient } from './compositorClient.ts';

/** The window has one compositor; its canvases are handed to it once and stay. */
export const compositor = new CompositorClient();
