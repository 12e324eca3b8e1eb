import { VARIABLES, VARIABLE_INFO, type Variable } from '@halfdeep/ocean';

/** How a variable is shown: its name inside a sentence, its kind of colour scale, and the unit in which people read it. */
export interface VariableView {
  label: string;
  scale: 'diverging' | 'sequential';
  /** Shown value = stored value × factor. */
  factor: number;
  unit: string;
}

/** Stored in SI; shown in units that leave a plain number on the colour bar. */
const SHOWN: Partial<Record<Variable, { factor: number; unit: string }>> = {
  vorticity: { factor: 1e6, unit: '10⁻⁶ 1/s' },
  pv: { factor: 1e9, unit: '10⁻⁹ 1/(m s)' },
  ekmanPumping: { factor: 86_400, unit: 'm/d' },
};

export const VARIABLE_VIEWS = Object.fromEntries(
  VARIABLES.map((variable) => {
    const { label, scale, unit } = VARIABLE_INFO[variable];
    const inSentence = variable === 'ekmanPumping' ? label : label.charAt(0).toLowerCase() + label.slice(1);
    return [variable, { label: inSentence, scale, ...(SHOWN[variable] ?? { factor: 1, unit }) }];
  }),
) as Record<Variable, VariableView>;

/** For a select: every variable with its name. */
export const VARIABLE_CHOICES = VARIABLES.map((id) => ({ id, label: VARIABLE_VIEWS[id].label }));

export function isVariable(text: string | null | undefined): text is Variable {
  return text != null && Object.hasOwn(VARIABLE_VIEWS, text);
}
