import { CAUTION } from '@halfdeep/contracts';
import {
  CORE_VERSION,
  describeSetup,
  type Fingerprint,
  type Frame,
  type Grid,
  type Integration,
  recordSteps,
  setupSha256,
  snapMooring,
  snapSection,
} from '@halfdeep/ocean';
import { type Quantity, quantitiesByPlace, quantitiesOfBasin, quantityAttributes } from './cf-columns';
import { type Attributes, FILL, NetcdfFile, type RecordVariable } from './netcdf-file';

/** Model day 0 is 1 January, 00:00, of model year 1; every year has 365 days. */
const TIME: Attributes = {
  standard_name: 'time',
  units: 'days since 0001-01-01 00:00:00',
  calendar: '365_day',
  axis: 'T',
};
const FILL_F4: Attributes = { _FillValue: Float32Array.of(FILL) };
const FILL_F8: Attributes = { _FillValue: Float64Array.of(FILL) };

type SeriesName = 'sections' | 'moorings' | 'budget';

/** One series in the file: its time, the bounds of its intervals, and a variable a quantity. */
interface Series {
  time: RecordVariable;
  bounds: RecordVariable | null;
  variables: { quantity: Quantity; variable: RecordVariable }[];
}

/**
 * The netCDF file of a run after the conventions CF-1.11 (cfconventions.org): fields on their own points of the C-grid,
 * each stream along a time of its own, and the setup, its hash and the fingerprint as global attributes.
 */
export class RunNetcdf {
  private readonly time: RecordVariable;
  private readonly fields: { eta: RecordVariable; h: RecordVariable; u: RecordVariable; v: RecordVariable };
  private readonly series: Partial<Record<SeriesName, Series>> = {};

  private constructor(
    private readonly file: NetcdfFile,
    private readonly run: Integration,
  ) {
    const { grid, setup } = run;
    this.describe();
    this.axes();
    file.dimension('time', null);
    this.time = file.records({
      name: 'time',
      type: 'float64',
      dimensions: ['time'],
      attributes: { ...TIME, long_name: 'model time of the frames' },
    });
    this.ground(grid);
    this.fields = this.frames();
    const { sections, moorings } = setup.output;
    if (sections.length > 0) this.series.sections = this.sections();
    if (moorings.length > 0) this.series.moorings = this.moorings();
    this.series.budget = this.intervals('budget', quantitiesOfBasin(run.budgetColumns()), [], {});
  }

  /** Begins the file of a run at `path`. `label`: a name for the title; null: the basin in words. */
  static async create(path: string, run: Integration, label: string | null, command: string): Promise<RunNetcdf> {
    const file = await NetcdfFile.create(path);
    try {
      const { basin, layer } = describeSetup(run.setup);
      file.attributes({
        Conventions: 'CF-1.11',
        title: label ?? `One-and-a-half-layer ocean, ${run.setup.basin.name || basin}, ${layer}`,
        source: `Halfdeep, numerical core version ${CORE_VERSION}: ${run.setup.numerics.equations} reduced-gravity equations on a C-grid`,
        history: `${new Date().toISOString().slice(0, 19)}Z ${command}`,
        comment: CAUTION,
      });
      return new RunNetcdf(file, run);
    } catch (error) {
      file.abandon();
      throw error;
    }
  }

  addFrame(frame: Frame): void {
    const { restThicknessM } = this.run.setup.layer;
    this.time.add([frame.day]);
    this.fields.eta.add(frame.eta);
    this.fields.h.add(frame.eta.map((eta) => restThicknessM + eta));
    this.fields.u.add(frame.u);
    this.fields.v.add(frame.v);
  }

  /** Adds a record of a series that closes at the present step. A stream without places in the setup has no records. */
  addRecord(name: SeriesName, values: Float64Array): void {
    const series = this.series[name];
    if (!series) return;
    const { day, setup } = this.run;
    series.time.add([day]);
    series.bounds?.add([day - recordSteps(setup)[name] / setup.numerics.stepsPerDay, day]);
    for (const { quantity, variable } of series.variables)
      variable.add(quantity.columns.map((column) => (column < 0 ? NaN : values[column])));
  }

  /** Writes the fingerprint of the last step and closes the file: it is whole. */
  finish(fingerprint: Fingerprint): void {
    this.file.attributes({
      halfdeep_fingerprint_sha256: fingerprint.sha256,
      halfdeep_fingerprint_shape: Int32Array.from(fingerprint.shape),
      halfdeep_last_step: Int32Array.of(this.run.step),
    });
    this.file.close();
  }

  /** Closes the file as it is, for somebody who is going to remove it. */
  abandon(): void {
    this.file.abandon();
  }

  private describe(): void {
    const { setup } = this.run;
    this.file.attributes({
      halfdeep_core_version: CORE_VERSION,
      halfdeep_setup: JSON.stringify(setup),
      halfdeep_setup_sha256: setupSha256(setup),
      halfdeep_steps_per_day: Int32Array.of(setup.numerics.stepsPerDay),
    });
  }

  /** Longitudes and latitudes of cell centres with their bounds, and of the faces on which u and v lie. */
  private axes(): void {
    const { file } = this;
    const { nx, ny, lonCentre, latCentre, lonFace, latFace } = this.run.grid;
    const [longitude, latitude] = [
      { standard_name: 'longitude', units: 'degrees_east', axis: 'X' },
      { standard_name: 'latitude', units: 'degrees_north', axis: 'Y' },
    ];
    const axis = (name: string, data: Float64Array, attributes: Attributes) => {
      file.dimension(name, data.length);
      file.variable({ name, type: 'float64', dimensions: [name], attributes, data });
    };
    axis('lon', lonCentre, { ...longitude, long_name: 'longitude of cell centres', bounds: 'lon_bnds' });
    axis('lat', latCentre, { ...latitude, long_name: 'latitude of cell centres', bounds: 'lat_bnds' });
    axis('lon_u', lonFace, { ...longitude, long_name: 'longitude of western and eastern cell faces' });
    axis('lat_v', latFace, { ...latitude, long_name: 'latitude of southern and northern cell faces' });
    file.dimension('nv', 2);
    const pairs = (faces: Float64Array, cells: number) =>
      Float64Array.from({ length: 2 * cells }, (_, k) => faces[(k >> 1) + (k & 1)]);
    file.variable({ name: 'lon_bnds', type: 'float64', dimensions: ['lon', 'nv'], data: pairs(lonFace, nx) });
    file.variable({ name: 'lat_bnds', type: 'float64', dimensions: ['lat', 'nv'], data: pairs(latFace, ny) });
  }

  /** What does not change: the sphere or plane, land and water, areas, rotation, the layer at rest. */
  private ground(grid: Grid): void {
    const { file } = this;
    const { nx, ny, dxC, dy, mask, f } = grid;
    const { constants, layer, basin } = this.run.setup;
    file.variable({
      name: 'crs',
      type: 'int32',
      dimensions: [],
      attributes: {
        grid_mapping_name: 'latitude_longitude',
        earth_radius: constants.earthRadiusM,
        comment:
          basin.geometry === 'spherical'
            ? 'Distances and areas are those of the sphere.'
            : 'Distances and areas are those of a plane (halfdeep_setup names which): cell_area is exact for the computation.',
      },
      data: Int32Array.of(0),
    });
    file.variable({
      name: 'mask',
      type: 'int8',
      dimensions: ['lat', 'lon'],
      attributes: {
        standard_name: 'sea_binary_mask',
        long_name: 'water cells',
        units: '1',
        flag_values: Int8Array.of(0, 1),
        flag_meanings: 'land water',
        grid_mapping: 'crs',
      },
      data: Int8Array.from(mask),
    });
    file.variable({
      name: 'cell_area',
      type: 'float64',
      dimensions: ['lat', 'lon'],
      attributes: { standard_name: 'cell_area', long_name: 'area of cells', units: 'm2', grid_mapping: 'crs' },
      data: Float64Array.from({ length: nx * ny }, (_, k) => dxC[Math.floor(k / nx)] * dy),
    });
    file.variable({
      name: 'coriolis',
      type: 'float64',
      dimensions: ['lat_v'],
      attributes: { standard_name: 'coriolis_parameter', long_name: 'Coriolis parameter', units: 's-1' },
      data: Float64Array.from(f),
    });
    file.variable({
      name: 'rest_thickness',
      type: 'float64',
      dimensions: [],
      attributes: { long_name: 'thickness H of the active layer at rest', units: 'm' },
      data: Float64Array.of(layer.restThicknessM),
    });
  }

  private frames() {
    const field = (name: string, place: readonly [string, string], attributes: Attributes) =>
      this.file.records({
        name,
        type: 'float32',
        dimensions: ['time', ...place],
        attributes: { ...attributes, cell_methods: 'time: point', grid_mapping: 'crs', ...FILL_F4 },
      });
    const centre = ['lat', 'lon'] as const;
    const area = { cell_measures: 'area: cell_area' };
    return {
      eta: field('eta', centre, {
        long_name: 'anomaly of the active layer’s thickness, h − H (positive: thicker)',
        units: 'm',
        ...area,
      }),
      h: field('h', centre, { long_name: 'thickness of the active layer, h = H + eta', units: 'm', ...area }),
      u: field('u', ['lat', 'lon_u'], {
        standard_name: 'eastward_sea_water_velocity',
        long_name: 'eastward velocity of the active layer on western and eastern cell faces',
        units: 'm s-1',
      }),
      v: field('v', ['lat_v', 'lon'], {
        standard_name: 'northward_sea_water_velocity',
        long_name: 'northward velocity of the active layer on southern and northern cell faces',
        units: 'm s-1',
      }),
    };
  }

  private sections(): Series {
    const { setup, grid } = this.run;
    const { sections } = setup.output;
    const { file } = this;
    file.dimension('section', sections.length);
    file.variable({
      name: 'section_name',
      type: 'string',
      dimensions: ['section'],
      attributes: { long_name: 'name of the section' },
      data: sections.map(({ name }) => name),
    });
    file.variable({
      name: 'section_direction',
      type: 'int8',
      dimensions: ['section'],
      attributes: {
        long_name:
          'line along which the section lies; transport is positive northward through a parallel, eastward through a meridian',
        flag_values: Int8Array.of(0, 1),
        flag_meanings: 'parallel meridian',
      },
      data: Int8Array.from(sections, ({ along }) => (along === 'latitude' ? 0 : 1)),
    });
    file.variable({
      name: 'section_position',
      type: 'float64',
      dimensions: ['section'],
      attributes: { long_name: 'latitude of a parallel (north positive), longitude of a meridian', units: 'degree' },
      data: Float64Array.from(sections, (section) => snapSection(grid, section).atDeg),
    });
    const quantities = quantitiesByPlace(this.run.sectionColumns(), sections.length);
    return this.intervals('section', quantities, ['section'], {
      coordinates: 'section_name section_direction section_position',
    });
  }

  private moorings(): Series {
    const { setup, grid } = this.run;
    const moorings = setup.output.moorings.map((mooring) => snapMooring(grid, mooring));
    const { file } = this;
    file.dimension('mooring', moorings.length);
    file.variable({
      name: 'mooring_name',
      type: 'string',
      dimensions: ['mooring'],
      attributes: { long_name: 'name of the mooring' },
      data: moorings.map(({ mooring }) => mooring.name),
    });
    file.variable({
      name: 'mooring_lon',
      type: 'float64',
      dimensions: ['mooring'],
      attributes: {
        standard_name: 'longitude',
        long_name: 'longitude of the cell that holds it',
        units: 'degrees_east',
      },
      data: Float64Array.from(moorings, ({ longitudeDeg }) => longitudeDeg),
    });
    file.variable({
      name: 'mooring_lat',
      type: 'float64',
      dimensions: ['mooring'],
      attributes: {
        standard_name: 'latitude',
        long_name: 'latitude of the cell that holds it',
        units: 'degrees_north',
      },
      data: Float64Array.from(moorings, ({ latitudeDeg }) => latitudeDeg),
    });
    const quantities = quantitiesByPlace(this.run.mooringColumns(), moorings.length);
    return this.stream(
      'mooring',
      quantities,
      ['mooring'],
      { coordinates: 'mooring_name mooring_lon mooring_lat' },
      null,
    );
  }

  /** A series of intervals: its time is the end of each, its bounds are both ends. */
  private intervals(prefix: string, quantities: Quantity[], place: string[], attributes: Attributes): Series {
    return this.stream(prefix, quantities, place, attributes, `${prefix}_time_bnds`);
  }

  private stream(
    prefix: string,
    quantities: Quantity[],
    place: string[],
    attributes: Attributes,
    boundsName: string | null,
  ): Series {
    const { file } = this;
    const name = `${prefix}_time`;
    const what = boundsName ? 'end of each interval' : 'moment of each record';
    file.dimension(name, null);
    const time = file.records({
      name,
      type: 'float64',
      dimensions: [name],
      attributes: { ...TIME, long_name: `model time: ${what}`, ...(boundsName && { bounds: boundsName }) },
    });
    const bounds = boundsName ? file.records({ name: boundsName, type: 'float64', dimensions: [name, 'nv'] }) : null;
    const variables = quantities.map((quantity) => ({
      quantity,
      variable: file.records({
        name: `${prefix}_${quantity.name}`,
        type: 'float64',
        dimensions: [name, ...place],
        attributes: { ...quantityAttributes(prefix, name, quantity), ...attributes, ...FILL_F8 },
      }),
    }));
    return { time, bounds, variables };
  }
}
