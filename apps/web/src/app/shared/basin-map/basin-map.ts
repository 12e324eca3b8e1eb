import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { coastLongitude, type Basin, type Setup } from '@halfdeep/ocean';
import { formatLatitude, formatLongitude } from '../../core/format';
import { elementWidth } from '../element-width';
import { graduation, mapFrame, pxX, pxY, ticks, type MapFrame } from './map-frame';

let maps = 0;

/** The basin before it is computed: coast with waterlines, sections, moorings, on a graduated frame of equal degrees. */
@Component({
  selector: 'app-basin-map',
  templateUrl: './basin-map.html',
  styleUrl: './basin-map.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class BasinMap {
  readonly setup = input.required<Pick<Setup, 'basin' | 'output'>>();
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
    return output.sections.map(({ name, along, atDeg }) => {
      if (along === 'longitude') {
        const x = pxX(frame, atDeg);
        return {
          name,
          x1: x,
          x2: x,
          y1: frame.y,
          y2: frame.y + frame.height,
          textX: x + 8,
          textY: frame.y + 14,
          anchor: 'start',
        };
      }
      const y = pxY(frame, atDeg);
      return {
        name,
        x1: pxX(frame, Math.max(basin.westDeg, coastLongitude(basin, atDeg))),
        x2: frame.x + frame.width,
        y1: y,
        y2: y,
        textX: frame.x + frame.width - 10,
        textY: y - 6,
        anchor: 'end',
      };
    });
  });
  protected readonly moorings = computed(() => {
    const frame = this.frame();
    return this.setup().output.moorings.map(({ name, longitudeDeg, latitudeDeg }) => ({
      name,
      x: pxX(frame, longitudeDeg),
      y: pxY(frame, latitudeDeg),
      // A label that would leave the frame stands on the other side.
      anchor: pxX(frame, longitudeDeg) > frame.x + frame.width - 40 ? 'end' : 'start',
    }));
  });
  protected readonly seaName = computed(() => {
    const frame = this.frame();
    const { name } = this.setup().basin;
    // About 11 px a letter with its spacing.
    return name && name.length * 11 < frame.width * 0.7 && frame.height > 80
      ? { text: name, x: frame.x + frame.width * 0.6, y: frame.y + Math.min(40, frame.height * 0.2) }
      : null;
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
      `sections ${output.sections.map(({ name }) => name).join(', ') || 'none'}`,
      `moorings ${output.moorings.map(({ name }) => name).join(', ') || 'none'}`,
    ];
    return parts.join('; ');
  });
}

function counted(count: number, noun: string): string {
  return count === 0 ? `no ${noun}s` : count === 1 ? `one ${noun}` : `${count} ${noun}s`;
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
