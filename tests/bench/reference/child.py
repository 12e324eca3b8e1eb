"""The NumPy reference: steps the same model as the C reference, commanded the same way (see child.c).

Argument: `out` steps with every operation writing into an array made beforehand, `plain` with array expressions as
one writes them down. Both follow the order of expressions of the TypeScript reference, on whole arrays.
"""
import struct
import sys
import time

import numpy as np

from linear import LinearOut, linear_plain
from nonlinear import NonlinearOut, nonlinear_plain

WEST = 2


class Model:
    """What the load message holds; fields are [ny + 3, pitch] with row j at j + 1 and cell i at column WEST + i."""

    def __init__(self, message):
        count = struct.unpack_from("<q", message)[0]
        self._ints = np.frombuffer(message, "<i8", count).tolist()
        self._at = 1
        self._doubles = np.frombuffer(message, "<f8", offset=8 * count)
        take = self._int
        self.nonlinear, self.nx, self.ny, self.pitch = take(), take(), take(), take()
        self.periodic, self.no_slip, self.phase, self.bases = take(), take(), take(), take()
        take(), take()
        self.has_entrainment, self.detrainment = take(), take()
        self.level_offsets = [take() for _ in range(4)]
        self.level_length = take()
        take()
        length = take()
        planes_x, planes_y = self._list(), self._list()
        names = ("cells", "u_points", "v_points", "sweep", "bare", "corners")
        masks = {name: self._mask(self._list(), self._list()) for name in names}
        self.wet, self.mask_u, self.mask_v = masks["cells"], masks["u_points"], masks["v_points"]
        starts, columns = self._list(), self._list()
        self.slip = np.ones((self.ny + 3, self.pitch))
        for j in range(self.ny + 1):
            self.slip[j + 1, columns[starts[j] : starts[j + 1]]] = 2.0 if self.no_slip else 0.0
        (self.dt, self.g, self.H, self.rho, self.r, self.A, self.kappa, self.dy) = self._take(8)
        (self.hmin, self.onset, self.timescale, self.stress_floor) = self._take(4)
        rows = (
            "per_dx_c per_dx_v div_north div_south curl_north curl_south coriolis_south coriolis_north coriolis_v "
            "turn_south turn_north share_south share_north f dx_c"
        ).split()
        for name in rows:
            setattr(self, name, self._take(self.ny + 1)[:, None].copy())
        self.tau_x = self._take(self.bases * (self.ny + 1)).reshape(self.bases, self.ny + 1)
        self.tau_y = self._take(self.bases * (self.ny + 1)).reshape(self.bases, self.ny + 1)
        # 1 over the number of water cells around a corner.
        self.per_wet = np.full((self.ny + 3, self.pitch), 0.25)
        counts = self._take(starts[self.ny + 1])
        for j in range(self.ny + 1):
            self.per_wet[j + 1, columns[starts[j] : starts[j + 1]]] = counts[starts[j] : starts[j + 1]]
        data = self._take(length)
        plane = lambda at: data[at : at + (self.ny + 1) * self.pitch].reshape(self.ny + 1, self.pitch).copy()
        self.fields_x = [None if at < 0 else plane(at) for at in planes_x]
        self.fields_y = [None if at < 0 else plane(at) for at in planes_y]
        self.levels = []
        for at in self.level_offsets:
            level = data[at : at + self.level_length].reshape(self.ny + 3, 3, self.pitch)
            self.levels.append([level[:, p, :].copy() for p in range(3)])

    def _int(self):
        self._at += 1
        return self._ints[self._at - 1]

    def _list(self):
        count = self._int()
        self._at += count
        return self._ints[self._at - count : self._at]

    def _take(self, count):
        values, self._doubles = self._doubles[:count], self._doubles[count:]
        return values

    def _mask(self, starts, bounds):
        mask = np.zeros((self.ny + 3, self.pitch))
        for j in range(len(starts) - 1):
            for s in range(starts[j], starts[j + 1]):
                mask[j + 1, bounds[2 * s] : bounds[2 * s + 1]] = 1.0
        return mask

    def role(self, shift):
        return self.levels[(self.phase + shift) & 3]

    def wrap(self, field):
        """Periodic copies into the halo columns."""
        if self.periodic:
            field[:, WEST - 1] = field[:, WEST + self.nx - 1]
            field[:, WEST + self.nx] = field[:, WEST]

    def stress(self, component, factors, factor):
        """tau times factor at the rows of a component: one number a row, or fields where a basis has one."""
        rows, fields = (self.tau_x, self.fields_x) if component == "x" else (self.tau_y, self.fields_y)
        uniform = np.zeros(self.ny + 1)
        for b in range(self.bases):
            uniform = uniform + factors[b] * rows[b]
        total = (uniform * factor)[:, None]
        for b in range(self.bases):
            if fields[b] is not None:
                total = total + (factors[b] * factor) * fields[b]
        return total

    def memory(self):
        """Phase and levels, laid out as they came."""
        out = np.empty((4, self.ny + 3, 3, self.pitch))
        for k, level in enumerate(self.levels):
            for p in range(3):
                out[k, :, p, :] = level[p]
        return struct.pack("<q", self.phase) + out.tobytes()


def main():
    # Corners and faces of land divide by no water; what comes out is never used.
    np.seterr(divide="ignore", invalid="ignore")
    style = sys.argv[1]
    source, sink = sys.stdin.buffer, sys.stdout.buffer
    model, step = None, None
    while len(head := source.read(16)) == 16:
        code, length = struct.unpack("<QQ", head)
        message = source.read(length)
        answer = b""
        if code == 1:
            model = Model(message)
            if style == "out":
                step = (NonlinearOut if model.nonlinear else LinearOut)(model)
            else:
                step = nonlinear_plain if model.nonlinear else linear_plain
        elif code == 2:
            steps = struct.unpack_from("<q", message)[0]
            factors = np.frombuffer(message, "<f8", offset=8).reshape(steps, model.bases)
            cpu, wall = time.process_time(), time.monotonic()
            for n in range(steps):
                step(model, factors[n])
                model.phase = (model.phase + 1) & 3
            answer = struct.pack("<2d", time.process_time() - cpu, time.monotonic() - wall)
        elif code == 3:
            answer = model.memory()
        sink.write(struct.pack("<Q", len(answer)) + answer)
        sink.flush()


if __name__ == "__main__":
    main()
