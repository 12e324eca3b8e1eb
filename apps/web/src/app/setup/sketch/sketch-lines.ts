import type { Setup, SketchLine } from '@halfdeep/ocean';
import { formatLatitude, formatLongitude } from '../../core/format';

/** A line that a sketch can be drawn along. */
export interface LineChoice extends Pick<SketchLine, 'along' | 'askedDeg'> {
  id: string;
  label: string;
}

// As short as two decimals say it: 10° N, 7.25° S.
const latitude = (degrees: number) => formatLatitude(Number(degrees.toFixed(2)));
const longitude = (degrees: number) => formatLongitude(Number(degrees.toFixed(2)));

/** The equator (or the middle latitude) first, then the setup's sections, then the middle longitude. */
export function lineChoices({ basin, output }: Pick<Setup, 'basin' | 'output'>): LineChoice[] {
  const { southDeg, northDeg, westDeg, eastDeg } = basin;
  const equator = southDeg < 0 && northDeg > 0;
  const middle = { along: 'latitude', askedDeg: equator ? 0 : (southDeg + northDeg) / 2 } as const;
  const meridian = { along: 'longitude', askedDeg: (westDeg + eastDeg) / 2 } as const;
  const places = [
    { ...middle, label: equator ? 'the equator' : latitude(middle.askedDeg) },
    ...output.sections.map(({ along, atDeg, name }) => ({
      along,
      askedDeg: atDeg,
      label: [name, along === 'latitude' ? latitude(atDeg) : longitude(atDeg)].filter(Boolean).join(', '),
    })),
    { ...meridian, label: longitude(meridian.askedDeg) },
  ];
  return places
    .filter((place, k) => places.findIndex((other) => sameLine(other, place)) === k)
    .map((place) => ({ ...place, id: `${place.along} ${place.askedDeg}` }));
}

function sameLine(a: Pick<SketchLine, 'along' | 'askedDeg'>, b: Pick<SketchLine, 'along' | 'askedDeg'>): boolean {
  return a.along === b.along && a.askedDeg === b.askedDeg;
}
