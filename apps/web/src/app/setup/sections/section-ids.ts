/** The sections of the form in the order of the physics; behind them the sketch, which holds no field. */
export const SECTIONS = [
  { id: 'basin', title: 'Basin', holds: ['/basin'] },
  { id: 'layer', title: 'Layer', holds: ['/layer'] },
  { id: 'wind', title: 'Wind', holds: ['/wind'] },
  { id: 'start', title: 'Start', holds: ['/start'] },
  { id: 'friction', title: 'Friction', holds: ['/friction'] },
  { id: 'numerics', title: 'Numerics', holds: ['/numerics'] },
  { id: 'output', title: 'Length and output', holds: ['/length', '/output'] },
  { id: 'constants', title: 'Constants', holds: ['/constants', '/schemaVersion'] },
  { id: 'sketch', title: 'Sketch', holds: [] },
] as const;
export type SectionId = (typeof SECTIONS)[number]['id'];

/** The section that holds a field, or null for what is not of the setup. */
export function sectionOf(pointer: string): SectionId | null {
  return (
    SECTIONS.find(({ holds }: { holds: readonly string[] }) =>
      holds.some((place) => pointer === place || pointer.startsWith(`${place}/`)),
    )?.id ?? null
  );
}
