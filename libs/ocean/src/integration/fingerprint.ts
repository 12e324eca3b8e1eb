import { float64Bytes, sha256Hex } from '../exact/bytes';
import type { Fingerprint } from '../integration-types';
import type { Model } from '../stepper/model';
import type { StateVariable } from '../stepper/fields';
import { shapeOf, unpad } from './levels';
import { CORE_VERSION } from './version';

/**
 * SHA-256 over six uint32 (rows and columns of u, v, h), then u, v and η (linear) or h (nonlinear) of the last step, little-endian float64 in
 * logical shapes without halos, row-major, land as 0, −0 written as +0 (numerics.md §7).
 */
export function fingerprintOf(model: Model): Fingerprint {
  const order: StateVariable[] = ['u', 'v', 'h'];
  const shape = order.flatMap((variable) => shapeOf(model.grid, variable));
  const head = new Uint8Array(24);
  const view = new DataView(head.buffer);
  shape.forEach((value, k) => view.setUint32(4 * k, value, true));
  const parts = order.map((variable) => {
    const values = unpad(model, variable);
    for (let k = 0; k < values.length; k++) values[k] += 0; // turns −0 into +0
    return float64Bytes(values);
  });
  return {
    sha256: sha256Hex(head, ...parts),
    coreVersion: CORE_VERSION,
    shape: shape as Fingerprint['shape'],
  };
}
