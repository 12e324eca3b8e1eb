import { Dataset, File as Hdf5File, ready } from 'h5wasm/node';

/** A variable as a reader of netCDF sees it. */
export interface CfVariable {
  name: string;
  /** HDF5 type: "<f", "<d", "<b", "S…" */
  dtype: string;
  dimensions: string[];
  shape: number[];
  attributes: Record<string, unknown>;
  attributeTypes: Record<string, string>;
  read(): unknown;
}
export interface CfFile {
  attributes: Record<string, unknown>;
  variables: Map<string, CfVariable>;
  close(): void;
}

/** Opens a netCDF-4 file through HDF5: dimensions are what the dimension scales say. */
export async function openCf(path: string): Promise<CfFile> {
  await ready;
  const file = new Hdf5File(path, 'r');
  const variables = new Map<string, CfVariable>();
  for (const name of file.keys()) {
    const dataset = file.get(name);
    if (!(dataset instanceof Dataset)) throw new Error(`${name} is no dataset: a file of ours has no groups.`);
    const scaleName = dataset.get_scale_name();
    // A dimension without a coordinate variable is no variable.
    if (scaleName?.startsWith('This is a netCDF dimension but not a netCDF variable.')) continue;
    const shape = dataset.shape ?? [];
    const dimensions =
      scaleName !== null
        ? [name]
        : shape.map((_, k) => dataset.get_attached_scales(k).map((scale) => scale.replace(/^\//, ''))[0] ?? '?');
    const attributes = Object.entries(dataset.attrs).filter(([key]) => !HDF5_OWN.has(key));
    variables.set(name, {
      name,
      dtype: typeName(dataset.dtype),
      dimensions,
      shape,
      attributes: Object.fromEntries(attributes.map(([key, attribute]) => [key, attribute.value])),
      attributeTypes: Object.fromEntries(attributes.map(([key, attribute]) => [key, typeName(attribute.dtype)])),
      read: () => dataset.value,
    });
  }
  const attributes = Object.entries(file.attrs).map(([key, attribute]) => [key, attribute.value] as const);
  return { attributes: Object.fromEntries(attributes), variables, close: () => file.close() };
}
/** Simple types alone; a compound one would not be ours. */
const typeName = (dtype: unknown) => (typeof dtype === 'string' ? dtype : JSON.stringify(dtype));
const HDF5_OWN = new Set(['CLASS', 'NAME', 'DIMENSION_LIST', 'REFERENCE_LIST', '_Netcdf4Dimid', '_Netcdf4Coordinates']);

// What UDUNITS reads: an optional factor, then unit names with whole exponents. The names are those that a run can need.
const BASE =
  '(?:degrees?(?:_east|_north)?|1|s|m|km|kg|K|N|kN|MN|GN|TN|J|kJ|MJ|GJ|TJ|PJ|EJ|W|kW|MW|GW|TW|PW|Pa|days?|seconds?|hours?|percent)';
const UNITS = new RegExp(`^(?:\\d+(?:\\.\\d+)?(?:e\\d+)? )?${BASE}(?:-?\\d+)?(?: ${BASE}(?:-?\\d+)?)*$`);
const SINCE = /^(?:days|hours|minutes|seconds) since \d{4}-\d{2}-\d{2}(?: \d{2}:\d{2}:\d{2})?$/;
const CALENDARS = ['standard', 'proleptic_gregorian', 'julian', 'noleap', '365_day', 'all_leap', '366_day', '360_day'];
/** Appendix E. */
const METHODS = ['point', 'sum', 'mean', 'maximum', 'minimum', 'mid_range', 'median', 'mode', 'range', 'variance'];

type Say = (section: string, text: string) => void;
/** An attribute as text; '' when it is missing. */
const text = (variable: CfVariable | undefined, attribute: string): string => {
  const value = variable?.attributes[attribute];
  return typeof value === 'string' ? value : value === undefined ? '' : JSON.stringify(value);
};

/** Rules of the conventions CF-1.11 (sections in brackets) that a file breaks, one sentence each. */
export function cfViolations(file: CfFile): string[] {
  const found: string[] = [];
  const say: Say = (section, what) => found.push(`${what} (CF-1.11 §${section})`);
  const { attributes, variables } = file;
  const conventions = attributes['Conventions'];
  if (typeof conventions !== 'string' || !/\bCF-1\.11\b/.test(conventions))
    say('2.6.1', 'Conventions must name CF-1.11');
  for (const name of ['title', 'history', 'source', 'comment'])
    if (typeof attributes[name] !== 'string' || attributes[name] === '')
      say('2.6.2', `The global attribute ${name} must be text`);
  const boundsNames = new Set([...variables.values()].map((variable) => text(variable, 'bounds')));
  for (const variable of variables.values()) {
    const tell: Say = (section, what) => say(section, `${variable.name}: ${what}`);
    checkNames(variable, tell);
    if (boundsNames.has(variable.name)) {
      if (Object.keys(variable.attributes).length > 0) tell('7.1', 'bounds need no attributes of their own');
      continue;
    }
    if ('grid_mapping_name' in variable.attributes) continue;
    checkMeaning(variable, tell);
    checkFlags(variable, tell);
    checkCoordinate(variable, variables, tell);
    checkReferences(variable, variables, tell);
    checkMethods(variable, variables, tell);
    checkAxes(variable, variables, tell);
  }
  return found;
}

function checkNames({ name, dimensions, attributes, attributeTypes, dtype }: CfVariable, tell: Say): void {
  for (const word of [name, ...dimensions, ...Object.keys(attributes)])
    if (!/^(?:[A-Za-z][A-Za-z0-9_]*|_FillValue)$/.test(word)) tell('2.3', `“${word}” is no name`);
  if (new Set(dimensions).size !== dimensions.length) tell('2.4', 'dimensions must all differ');
  const fill = attributeTypes['_FillValue'];
  if (fill !== undefined && fill !== dtype) tell('2.5.1', `_FillValue is ${fill}, the data ${dtype}`);
}

function checkMeaning(variable: CfVariable, tell: Say): void {
  const { attributes, dtype } = variable;
  if (!('standard_name' in attributes) && !('long_name' in attributes)) tell('3.3', 'no standard_name, no long_name');
  const units = attributes['units'];
  if (units === undefined) {
    const needsNone = /^[SA]/.test(dtype) || 'flag_meanings' in attributes;
    if (!needsNone) tell('3.1', 'no units');
  } else if (typeof units !== 'string' || !(UNITS.test(units) || SINCE.test(units)))
    tell('3.1', `units ${text(variable, 'units')} cannot be parsed`);
  const standardName = text(variable, 'standard_name');
  if (standardName === 'longitude' && units !== 'degrees_east') tell('4.2', 'units of longitude');
  if (standardName === 'latitude' && units !== 'degrees_north') tell('4.1', 'units of latitude');
  if (standardName !== 'time') return;
  if (!SINCE.test(text(variable, 'units'))) tell('4.4', 'units of time must say since when');
  if (!CALENDARS.includes(text(variable, 'calendar'))) tell('4.4.1', 'no known calendar');
}

function checkFlags(variable: CfVariable, tell: Say): void {
  const { attributes, attributeTypes, dtype } = variable;
  if (!('flag_meanings' in attributes)) return;
  const values = [...(attributes['flag_values'] as Int8Array)];
  if (attributeTypes['flag_values'] !== dtype) tell('3.5', 'flag_values must have the type of the data');
  if (new Set(values).size !== values.length) tell('3.5', 'flag_values must differ');
  if (text(variable, 'flag_meanings').split(' ').length !== values.length) tell('3.5', 'a meaning for each value');
}

function checkCoordinate(variable: CfVariable, variables: CfFile['variables'], tell: Say): void {
  const { name, dimensions, attributes, shape } = variable;
  if (dimensions.length === 1 && dimensions[0] === name) {
    if ('_FillValue' in attributes) tell('2.5.1', 'a coordinate variable has no missing values');
    const values = variable.read() as Float64Array;
    if (values.some((value, k) => k > 0 && !(value > values[k - 1])))
      tell('1.3', 'a coordinate variable must be monotonic');
    if (!['X', 'Y', 'Z', 'T'].includes(text(variable, 'axis'))) tell('4', 'axis must be X, Y, Z or T');
  }
  if (!('bounds' in attributes)) return;
  const bounds = variables.get(text(variable, 'bounds'));
  if (!bounds) return tell('7.1', 'its bounds are missing');
  if (bounds.dimensions[0] !== name || bounds.shape[0] !== shape[0] || bounds.shape[1] !== 2)
    return tell('7.1', 'bounds must be pairs along the same dimension');
  const [values, pairs] = [variable.read() as Float64Array, bounds.read() as Float64Array];
  if (!values.every((value, k) => pairs[2 * k] <= value && value <= pairs[2 * k + 1]))
    tell('7.1', 'a coordinate lies outside its bounds');
}

function checkReferences(variable: CfVariable, variables: CfFile['variables'], tell: Say): void {
  const named = (attribute: string) =>
    text(variable, attribute)
      .split(' ')
      .filter((word) => word !== '');
  for (const word of named('coordinates')) {
    const other = variables.get(word);
    if (!other) tell('5', `coordinates name “${word}”, which is missing`);
    else if (!other.dimensions.every((dimension) => variable.dimensions.includes(dimension)))
      tell('5', `“${word}” lies along other dimensions`);
  }
  for (const word of named('grid_mapping'))
    if (!('grid_mapping_name' in (variables.get(word)?.attributes ?? {}))) tell('5.6', `“${word}” is no grid mapping`);
  if (!('cell_measures' in variable.attributes)) return;
  const area = variables.get(/^area: (\w+)$/.exec(text(variable, 'cell_measures'))?.[1] ?? '');
  if (text(area, 'units') !== 'm2') tell('7.2', 'cell_measures must name an area in m2');
}

function checkMethods(variable: CfVariable, variables: CfFile['variables'], tell: Say): void {
  for (const [, dimension, method] of text(variable, 'cell_methods').matchAll(/(\w+): (\w+)/g)) {
    if (!variable.dimensions.includes(dimension)) tell('7.3', `cell_methods speak of “${dimension}”`);
    if (!METHODS.includes(method)) tell('7.3', `“${method}” is no cell method`);
    // Over an interval: the reader must learn over which.
    const time = variables.get(dimension);
    if (method !== 'point' && !('bounds' in (time?.attributes ?? {}))) tell('7.3', `${dimension} has no bounds`);
  }
}

function checkAxes({ dimensions }: CfVariable, variables: CfFile['variables'], tell: Say): void {
  const axes = dimensions.map((dimension) => text(variables.get(dimension), 'axis')).filter((axis) => axis !== '');
  if (new Set(axes).size !== axes.length) tell('5', 'two coordinates of one axis');
  const order = axes.map((axis) => 'TZYX'.indexOf(axis));
  if (order.some((place, k) => k > 0 && place < order[k - 1])) tell('2.4', 'dimensions should stand as T, Z, Y, X');
}
