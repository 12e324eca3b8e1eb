import type { Column } from '@halfdeep/ocean';
import { cfUnit } from './cf-units';
import type { Attributes } from './netcdf-file';

/** A quantity that one or several columns of a stream hold: one variable of the file. */
export interface Quantity {
  /** Of the variable, without the stream's prefix: "transport_now". */
  name: string;
  unit: string;
  kind: Column['kind'];
  longName: string;
  /** Column of each place (section or mooring), −1 where that place does not have the quantity. */
  columns: number[];
}

/**
 * Quantities of a stream whose columns are named "<place>.<quantity>" with labels "<place's name>: …", in the order in
 * which they first appear.
 */
export function quantitiesByPlace(columns: readonly Column[], places: number): Quantity[] {
  const found = new Map<string, Quantity>();
  columns.forEach((column, index) => {
    const [place = '', key = ''] = column.name.split(/\.(.*)/);
    const k = Number(place);
    if (!(Number.isInteger(k) && k >= 0 && k < places && key))
      throw new RangeError(`The column “${column.name}” is not “<place>.<quantity>” of ${places} places.`);
    const longName = column.label.slice(column.label.indexOf(': ') + 2).replace(/ of it$/, ' of the section');
    let quantity = found.get(key);
    if (!quantity) {
      const none = new Array<number>(places).fill(-1);
      quantity = { name: snake(key), unit: column.unit, kind: column.kind, longName, columns: none };
      found.set(key, quantity);
    } else quantity.longName = together(quantity.longName, longName);
    quantity.columns[k] = index;
  });
  return [...found.values()];
}

/** One name for two that may differ in their first word: "northward or eastward volume transport". */
function together(known: string, other: string): string {
  const [first = '', ...rest] = other.split(' ');
  if (known === other || known.split(' or ').some((name) => name.startsWith(first))) return known;
  const tail = rest.join(' ');
  return known.endsWith(` ${tail}`) ? `${known.slice(0, -tail.length)}or ${first} ${tail}` : `${known}, or ${other}`;
}

/** Quantities of a stream of one place: the basin. */
export function quantitiesOfBasin(columns: readonly Column[]): Quantity[] {
  return columns.map(({ name, unit, kind, label }, index) => ({
    name: snake(name),
    unit,
    kind,
    longName: label,
    columns: [index],
  }));
}

/** Standard names are quoted from memory of the CF standard name table; what has none there has a long name alone. */
const STANDARD_NAMES: Readonly<Record<string, string>> = {
  section_transport: 'ocean_volume_transport_across_line',
  section_transport_now: 'ocean_volume_transport_across_line',
  mooring_u_centre: 'eastward_sea_water_velocity',
  mooring_v_centre: 'northward_sea_water_velocity',
};
/** Where the label on a plate is too short for a file. */
const LONG_NAMES: Readonly<Record<string, string>> = {
  mooring_eta: 'anomaly of the active layer’s thickness, h − H, in the cell that holds the mooring',
  mooring_u_centre: 'eastward velocity of the active layer, mean of the faces of the cell that holds the mooring',
  mooring_v_centre: 'northward velocity of the active layer, mean of the faces of the cell that holds the mooring',
};
const METHODS: Record<Column['kind'], string> = { instant: 'point', mean: 'mean', integral: 'sum' };

/** Attributes of the variable `prefix_quantity` along the time dimension `time`. */
export function quantityAttributes(prefix: string, time: string, quantity: Quantity): Attributes {
  const standardName = STANDARD_NAMES[`${prefix}_${quantity.name}`];
  return {
    ...(standardName && { standard_name: standardName }),
    long_name: LONG_NAMES[`${prefix}_${quantity.name}`] ?? quantity.longName,
    units: cfUnit(quantity.unit),
    cell_methods: `${time}: ${METHODS[quantity.kind]}`,
  };
}

/** "transportNow" → "transport_now". Names of netCDF variables have letters, digits and underscores. */
export function snake(name: string): string {
  return name
    .replace(/([a-z0-9])([A-Z])/g, '$1_$2')
    .replace(/[^A-Za-z0-9]+/g, '_')
    .toLowerCase();
}
