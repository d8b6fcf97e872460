import { FIGURE_NAMES, type FigureName, type Figures, type FigureValues, plainFigure } from '#src/planning/figures.ts';

/** Values of the named figures, null for all others. */
export function valuesWith(some: Partial<FigureValues>): FigureValues {
  return { ...(Object.fromEntries(FIGURE_NAMES.map((name) => [name, null])) as unknown as FigureValues), ...some };
}

/** Figures without bands of these values. */
export function figuresOf(some: Partial<FigureValues>): Figures {
  const values = valuesWith(some);
  const entries = FIGURE_NAMES.map((name): [FigureName, Figures[FigureName]] => [name, plainFigure(values[name])]);
  return Object.fromEntries(entries) as Figures;
}
