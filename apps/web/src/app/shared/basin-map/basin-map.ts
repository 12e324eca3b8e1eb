import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { coastLongitude, type Basin, type Setup } from '@halfdeep/ocean';
import { formatLatitude, formatLongitude } from '../../core/format';
import { elementWidth } from '../element-width';
import { graduation, mapFrame, pxX, pxY, ticks, type MapFrame } from './map-frame';
import { freePlace, overlaps, type Box } from './sea-name';

let maps = 0;

/** The basin before it is computed: coast with waterlines, sections, moorings, on a graduated frame of equal degrees. */
@Component({
  selector: 'app-basin-map',
  templateUrl: './basin-map.html',
  styleUrl: './basin-map.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class BasinMap {
  readonly setup = input.required<Pick<Setup, 'basin' | 'output'> & Partial<Pick<Setup, 'friction'>>>();
  private readonly width = elementWidth(480);
  protected readonly id = `basin-map-${++maps}`;
  protected readonly waterlines = [20, 16, 12, 8, 4];

  protected readonly frame = computed(() => mapFrame(this.setup().basin, Math.max(220, this.width() - 32), 380));
  protected readonly box = computed(() => {
    const { y, height } = this.frame();
    return { width: Math.max(220, this.width() - 32), height: y + height + 26 };
  });
  protected readonly rule = computed(() => {
    const frame = this.frame();
    return {
      x: graduation(frame.west, frame.east, frame.tickX / 2).map(({ from, to, inked }) => ({
        at: pxX(frame, from),
        length: pxX(frame, to) - pxX(frame, from),
        inked,
      })),
      y: graduation(frame.south, frame.north, frame.tickY / 2).map(({ from, to, inked }) => ({
        at: pxY(frame, to),
        length: pxY(frame, from) - pxY(frame, to),
        inked,
      })),
    };
  });
  protected readonly labels = computed(() => {
    const frame = this.frame();
    return {
      x: ticks(frame.west, frame.east, frame.tickX).map((degrees) => ({
        at: pxX(frame, degrees),
        text: formatLongitude(degrees),
      })),
      y: ticks(frame.south, frame.north, frame.tickY).map((degrees) => ({
        at: pxY(frame, degrees),
        text: formatLatitude(degrees),
      })),
    };
  });
  /** Outline of all land, one SVG path. */
  protected readonly land = computed(() => landPath(this.setup().basin, this.frame()));
  protected readonly equator = computed(() => {
    const frame = this.frame();
    return frame.south < 0 && frame.north > 0 ? pxY(frame, 0) : null;
  });
  protected readonly sections = computed(() => {
    const frame = this.frame();
    const { basin, output } = this.setup();
    const taken = this.moorings().flatMap(({ box, x, y }) => [box, { x: x - 7, y: y - 6, width: 14, height: 13 }]);
    return output.sections.map(({ name, along, atDeg }) => {
      const [x, y] = [pxX(frame, atDeg), pxY(frame, atDeg)];
      const line =
        along === 'longitude'
          ? { x1: x, x2: x, y1: frame.y, y2: frame.y + frame.height }
          : {
              x1: pxX(frame, Math.max(basin.westDeg, coastLongitude(basin, atDeg))),
              x2: frame.x + frame.width,
              y1: y,
              y2: y,
            };
      const width = name.length * 6;
      const places =
        along === 'longitude'
          ? [14, frame.height - 8, 30].flatMap((down) => [
              { x: x + 8, y: frame.y + down },
              { x: x - 8 - width, y: frame.y + down },
            ])
          : [line.x2 - 10 - width, (line.x1 + line.x2) / 2 - width - 12, line.x1 + 26].flatMap((left) => [
              { x: left, y: y - 6 },
              { x: left, y: y + 15 },
            ]);
      const box = (place: { x: number; y: number }): Box => ({ x: place.x, y: place.y - 11, width, height: 14 });
      const free = places.find((place) => !taken.some((other) => overlaps(box(place), other)));
      const text = free ?? { x: line.x1 + 26, y: line.y1 - 6 };
      taken.push(box(text));
      return { name, ...line, text, box: box(text) };
    });
  });
  protected readonly moorings = computed(() => {
    const frame = this.frame();
    return this.setup().output.moorings.map(({ name, longitudeDeg, latitudeDeg }) => {
      const [x, y] = [pxX(frame, longitudeDeg), pxY(frame, latitudeDeg)];
      const width = name.length * 6;
      // A label that would leave the frame stands on the other side.
      const left = x + 8 + width > frame.x + frame.width ? x - 9 - width : x + 8;
      return { name, x, y, text: { x: left, y: y - 7 }, box: { x: left, y: y - 18, width, height: 14 } };
    });
  });
  /** Stretches along the edges in which waves are damped, px. */
  protected readonly sponges = computed(() => {
    const frame = this.frame();
    const { westDeg, eastDeg, southDeg, northDeg, sponges } = this.setup().basin;
    return sponges.map(({ edge, widthDeg }) => {
      const west = edge === 'east' ? eastDeg - widthDeg : westDeg;
      const east = edge === 'west' ? westDeg + widthDeg : eastDeg;
      const south = edge === 'north' ? northDeg - widthDeg : southDeg;
      const north = edge === 'south' ? southDeg + widthDeg : northDeg;
      const [x, y] = [pxX(frame, west), pxY(frame, north)];
      return { edge, x, y, width: Math.max(0, pxX(frame, east) - x), height: Math.max(0, pxY(frame, south) - y) };
    });
  });
  /** Places of other viscosity: ellipses of their widths, px. */
  protected readonly patches = computed(() => {
    const frame = this.frame();
    return (this.setup().friction?.viscosityPatches ?? []).map((patch) => {
      const [x, y] = [pxX(frame, patch.longitudeDeg), pxY(frame, patch.latitudeDeg)];
      return {
        x,
        y,
        rx: Math.abs(pxX(frame, patch.longitudeDeg + patch.widthLongitudeDeg) - x),
        ry: Math.abs(pxY(frame, patch.latitudeDeg + patch.widthLatitudeDeg) - y),
      };
    });
  });
  /** The name of the water where nothing else is drawn; null when it fits nowhere. */
  protected readonly seaName = computed(() => {
    const frame = this.frame();
    const { name } = this.setup().basin;
    // About 12 px a letter with its spacing.
    const place = name ? freePlace(frame, name.length * 12, 20, this.taken()) : null;
    return place ? { text: name, x: place.x + place.width / 2, y: place.y + 15 } : null;
  });
  /** What the name must not touch, px. */
  private readonly taken = computed<Box[]>(() => {
    const frame = this.frame();
    const { basin } = this.setup();
    const between = (x1: number, y1: number, x2: number, y2: number): Box => ({
      x: Math.min(x1, x2) - 6,
      y: Math.min(y1, y2) - 6,
      width: Math.abs(x2 - x1) + 12,
      height: Math.abs(y2 - y1) + 12,
    });
    const coast = basin.westernCoast;
    const land = coast.kind === 'slanting' ? Math.max(coast.atSouthDeg, coast.atNorthDeg) : basin.westDeg;
    return [
      ...(land > basin.westDeg ? [between(frame.x, frame.y, pxX(frame, land), frame.y + frame.height)] : []),
      ...basin.islands.map((island) => {
        const { westDeg, eastDeg, southDeg, northDeg } = islandBox(island);
        return between(pxX(frame, westDeg), pxY(frame, northDeg), pxX(frame, eastDeg), pxY(frame, southDeg));
      }),
      ...this.sponges().map(({ x, y, width, height }) => ({ x, y, width, height })),
      ...this.patches().map(({ x, y, rx, ry }) => between(x - rx, y - ry, x + rx, y + ry)),
      ...this.sections().flatMap(({ x1, y1, x2, y2, box }) => [between(x1, y1, x2, y2), box]),
      ...this.moorings().flatMap(({ x, y, box }) => [between(x, y, x, y), box]),
      ...(this.equator() === null
        ? []
        : [between(frame.x, this.equator() ?? 0, frame.x + frame.width, this.equator() ?? 0)]),
    ];
  });
  protected readonly spoken = computed(() => {
    const { basin, output } = this.setup();
    const parts = [
      `Map of ${basin.name || 'the basin'}, ${formatLongitude(basin.westDeg)} to ${formatLongitude(basin.eastDeg)}, ${formatLatitude(basin.southDeg)} to ${formatLatitude(basin.northDeg)}`,
      basin.zonallyPeriodic
        ? 'zonally periodic'
        : basin.westernCoast.kind === 'slanting'
          ? 'slanting western coast'
          : 'closed',
      counted(basin.islands.length, 'island'),
      ...basin.sponges.map(({ edge }) => `sponge along the ${edge} edge`),
      ...(this.patches().length > 0 ? [counted(this.patches().length, 'place') + ' of other viscosity'] : []),
      `sections ${output.sections.map(({ name }) => name).join(', ') || 'none'}`,
      `moorings ${output.moorings.map(({ name }) => name).join(', ') || 'none'}`,
    ];
    return parts.join('; ');
  });
}

function counted(count: number, noun: string): string {
  return count === 0 ? `no ${noun}s` : count === 1 ? `one ${noun}` : `${count} ${noun}s`;
}

function islandBox(island: Basin['islands'][number]) {
  if (island.kind === 'box') return island;
  const [longitudes, latitudes] = [island.points.map((point) => point[0]), island.points.map((point) => point[1])];
  return {
    westDeg: Math.min(...longitudes),
    eastDeg: Math.max(...longitudes),
    southDeg: Math.min(...latitudes),
    northDeg: Math.max(...latitudes),
  };
}

function landPath(basin: Basin, frame: MapFrame): string {
  const ring = (points: readonly (readonly [number, number])[]) =>
    `M${points.map(([longitude, latitude]) => `${pxX(frame, longitude).toFixed(1)} ${pxY(frame, latitude).toFixed(1)}`).join('L')}Z`;
  const coast = basin.westernCoast;
  const beyond = basin.westDeg - (basin.eastDeg - basin.westDeg); // the far side of this land is never seen
  const rings =
    coast.kind === 'slanting'
      ? [
          ring([
            [beyond, basin.southDeg],
            [coast.atSouthDeg, basin.southDeg],
            [coast.atNorthDeg, basin.northDeg],
            [beyond, basin.northDeg],
          ]),
        ]
      : [];
  for (const island of basin.islands)
    rings.push(
      island.kind === 'polygon'
        ? ring(island.points)
        : ring([
            [island.westDeg, island.southDeg],
            [island.eastDeg, island.southDeg],
            [island.eastDeg, island.northDeg],
            [island.westDeg, island.northDeg],
          ]),
    );
  return rings.join('');
}
