import type { Check } from '../record.ts';
import { baseSet, ceramics, orders } from './base-set.ts';
import { overcut, roughness } from './cavity.ts';
import { effects } from './effects.ts';
import { faces } from './face.ts';
import { depthLaws, settingLaws, shareOfHammering } from './laws.ts';
import { trends } from './trends.ts';

/** D1 to D14: the model against published measurements. */
export const mainChecks: readonly Check[] = [
  ...baseSet,
  ...settingLaws,
  overcut,
  ...shareOfHammering,
  roughness,
  ...depthLaws,
  ...ceramics,
];

/** Every check of the table, the main ones first. */
export const allChecks: readonly Check[] = [...mainChecks, ...orders, ...faces, ...trends, ...effects];
