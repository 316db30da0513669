import { sha256Hex } from '../recipes/contentId.ts';

/** A part of a run: the `index`-th of `count`, from 1. */
export interface Shard {
  index: number;
  count: number;
}

/**
 * The frames of a shard: disjoint, and together all of them. Which shard a frame is in follows from its name alone and
 * not from its place: shards that start at different times agree although photos come and go in between.
 */
export function framesOfShard<Frame extends { name: string }>(
  frames: readonly Frame[],
  shard: Shard | null,
): Frame[] {
  return frames.filter(({ name }) => !shard || shardOf(name, shard.count) === shard.index);
}

function shardOf(name: string, count: number): number {
  return (Number.parseInt(sha256Hex(name.normalize('NFC')).slice(0, 8), 16) % count) + 1;
}
