import { Buffer } from 'node:buffer';
import { type Dataset, File as Hdf5File, type Group, ready } from 'h5wasm/node';

/** What an attribute may hold: text, float64 or a typed array (its type is the attribute's). */
export type AttributeValue = string | number | Int8Array | Int32Array | Float32Array | Float64Array;
export type Attributes = Readonly<Record<string, AttributeValue>>;
export type VariableType = 'int8' | 'int32' | 'float32' | 'float64' | 'string';

const DTYPES: Record<VariableType, string> = {
  int8: '<b',
  int32: '<i',
  float32: '<f',
  float64: '<d',
  string: 'S',
};
/** Default fill of the netCDF library for float and double: 15 · 2^119. */
export const FILL = 15 * 2 ** 119;
/** Records of a small variable wait until this many values are there: a write costs far more than a copy. */
const BUFFERED_VALUES = 1 << 15;
/** Values in a chunk of a variable with short records. */
const CHUNK_VALUES = 1 << 14;

export interface VariableDefinition {
  name: string;
  type: VariableType;
  /** Names of dimensions, slowest first; the unlimited one, where there is one, comes first. */
  dimensions: readonly string[];
  attributes?: Attributes;
  /** All values of a variable without an unlimited dimension. */
  data?: Float64Array | Float32Array | Int8Array | Int32Array | readonly string[];
}

/**
 * A netCDF-4 file, written through HDF5: dimensions are dimension scales, as the netCDF-4 library lays them out, so that
 * it and all that use it read the file. Names and attributes keep the order in which they were made.
 */
export class NetcdfFile {
  private readonly sizes = new Map<string, number | null>();
  private readonly scales = new Set<string>();
  private readonly growing: RecordVariable[] = [];
  private closed = false;

  private constructor(private readonly file: Hdf5File) {}

  /** A new file at `path`, which is overwritten. Throws when it cannot be made. */
  static async create(path: string): Promise<NetcdfFile> {
    await ready;
    return new NetcdfFile(new Hdf5File(path, 'w', { track_order: true, libver: ['v108', 'v108'] }));
  }

  /** A dimension; null is the unlimited one of a record variable. Its coordinate variable, where it has one, has its name. */
  dimension(name: string, size: number | null): void {
    if (this.sizes.has(name)) throw new RangeError(`There is a dimension “${name}” already.`);
    this.sizes.set(name, size);
  }

  /** Global attributes. */
  attributes(attributes: Attributes): void {
    writeAttributes(this.file, attributes);
  }

  /** A variable of fixed size, written at once; throws RangeError when its values do not fill its dimensions. */
  variable(definition: VariableDefinition): void {
    const { name, type, data } = definition;
    const shape = this.shapeOf(definition);
    const values = shape.reduce((product, size) => product * size, 1);
    if (!data || data.length !== values)
      throw new RangeError(`${name} holds ${values} values; ${data?.length ?? 'none'} arrived.`);
    const dataset = this.file.create_dataset({
      name,
      data: Array.isArray(data) ? [...(data as string[])] : (data as Float64Array),
      shape,
      dtype: DTYPES[type],
      track_order: true,
    });
    this.finish(definition, dataset);
  }

  /** A variable that grows along its first, unlimited dimension, record by record. */
  records(definition: VariableDefinition & { type: 'float32' | 'float64' }): RecordVariable {
    const { name, type } = definition;
    const record = this.shapeOf({ ...definition, dimensions: definition.dimensions.slice(1) });
    const length = record.reduce((product, size) => product * size, 1);
    const dataset = this.file.create_dataset({
      name,
      data: new (type === 'float32' ? Float32Array : Float64Array)(0),
      shape: [0, ...record],
      maxshape: [null, ...record],
      chunks: [Math.max(1, Math.floor(CHUNK_VALUES / length)), ...record],
      dtype: DTYPES[type],
      track_order: true,
    });
    this.finish(definition, dataset);
    const variable = new RecordVariable(dataset, type, record, length);
    this.growing.push(variable);
    return variable;
  }

  /** Writes what waits and closes the file; nothing can be written any more. */
  close(): void {
    if (this.closed) return;
    for (const variable of this.growing) variable.flush();
    this.abandon();
  }

  /** Closes the file as it is. */
  abandon(): void {
    if (this.closed) return;
    this.closed = true;
    if (this.file.close() < 0) throw new Error('The HDF5 library could not close the file.');
  }

  private shapeOf({ name, dimensions }: VariableDefinition): number[] {
    return dimensions.map((dimension) => {
      const size = this.sizes.get(dimension);
      if (typeof size !== 'number')
        throw new RangeError(`${name} lies along “${dimension}”, which is not a dimension of fixed size.`);
      return size;
    });
  }

  private finish({ name, dimensions, attributes }: VariableDefinition, dataset: Dataset): void {
    if (dimensions.length === 1 && dimensions[0] === name) {
      dataset.make_scale(name);
      this.scales.add(name);
    } else dimensions.forEach((dimension, k) => dataset.attach_scale(k, this.scaleOf(dimension)));
    writeAttributes(dataset, attributes ?? {});
  }

  /** The scale of a dimension; one without a coordinate variable is marked as the netCDF-4 library marks it. */
  private scaleOf(dimension: string): string {
    if (this.scales.has(dimension)) return dimension;
    const size = this.sizes.get(dimension);
    if (typeof size !== 'number')
      throw new RangeError(`Make the coordinate variable of “${dimension}” before what lies along it.`);
    const scale = this.file.create_dataset({
      name: dimension,
      data: new Float32Array(size),
      shape: [size],
      dtype: '<f',
      track_order: true,
    });
    scale.make_scale(`This is a netCDF dimension but not a netCDF variable.${String(size).padStart(10)}`);
    this.scales.add(dimension);
    return dimension;
  }
}

/** A variable along an unlimited dimension. */
export class RecordVariable {
  private written = 0;
  private waiting: (Float32Array | Float64Array)[] = [];

  constructor(
    private readonly dataset: Dataset,
    private readonly type: 'float32' | 'float64',
    private readonly shape: readonly number[],
    /** Values in a record. */
    private readonly length: number,
  ) {}

  /** Adds a record; NaN becomes the fill value. Throws RangeError when its length is wrong. */
  add(record: ArrayLike<number>): void {
    if (record.length !== this.length)
      throw new RangeError(`A record has ${this.length} values; ${record.length} arrived.`);
    const values = new (this.type === 'float32' ? Float32Array : Float64Array)(this.length);
    for (let k = 0; k < this.length; k++) values[k] = Number.isNaN(record[k]) ? FILL : record[k];
    this.waiting.push(values);
    if (this.waiting.length * this.length >= BUFFERED_VALUES) this.flush();
  }

  /** Writes what waits. */
  flush(): void {
    const { waiting } = this;
    if (waiting.length === 0) return;
    const values = new (this.type === 'float32' ? Float32Array : Float64Array)(waiting.length * this.length);
    waiting.forEach((record, k) => values.set(record, k * this.length));
    const end = this.written + waiting.length;
    this.dataset.resize([end, ...this.shape]);
    this.dataset.write_slice([[this.written, end], ...this.shape.map((): [] => [])], values);
    this.written = end;
    this.waiting = [];
  }
}

function writeAttributes(target: Dataset | Group, attributes: Attributes): void {
  for (const [name, value] of Object.entries(attributes)) {
    if (typeof value === 'string') {
      // Text of fixed length is what the netCDF library calls char; an empty one has a length all the same.
      target.create_attribute(name, value, [], `S${Math.max(1, Buffer.byteLength(value))}`);
    } else if (typeof value === 'number') target.create_attribute(name, Float64Array.of(value), [1], '<d');
    else target.create_attribute(name, value, [value.length]);
  }
}
