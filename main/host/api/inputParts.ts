import { z } from 'zod';

/** Parts that inputs of several commands share. */
export const path = z.string().min(1).max(4096);
export const photoId = z.string().min(1).max(64);

/** Key → value; the values themselves are checked against the parameter table. */
export const parameters = z
  .record(z.string().max(40), z.union([z.string().max(64), z.number()]))
  .refine((values) => Object.keys(values).length <= 128, 'at most 128 parameters');
