import { type ColourLimits } from './limits';

/** How a reader has set the colour scale against the fitted one. */
export const SCALE_CHOICES = [
  { id: 'fitted', label: 'fitted', factor: 1 },
  { id: 'half', label: 'half', factor: 0.5 },
  { id: 'quarter', label: 'quarter', factor: 0.25 },
  { id: 'double', label: 'double', factor: 2 },
] as const;
export type ScaleChoice = (typeof SCALE_CHOICES)[number]['id'];

/** Limits narrowed or widened about zero, or about the low end of a sequential scale. */
export function chosenLimits(fitted: ColourLimits, choice: ScaleChoice): ColourLimits {
  const factor = SCALE_CHOICES.find(({ id }) => id === choice)?.factor ?? 1;
  if (fitted.min === -fitted.max) return { min: fitted.min * factor, max: fitted.max * factor };
  return { min: fitted.min, max: fitted.min + (fitted.max - fitted.min) * factor };
}
