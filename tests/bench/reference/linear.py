"""The linear step in NumPy, on whole arrays."""
import numpy as np

WEST = 2
E0, E1, E2 = 1.781105, -1.06221, 0.281105
P1, P0, PM1, PM2 = 0.614, 0.285, 0.088, 0.013


def part(stress, rows, columns):
    """Stress of some rows: a column of numbers, or a field."""
    return stress[rows, columns] if stress.shape[1] > 1 else stress[rows]


def linear_plain(m, factors):
    nx, ny = m.nx, m.ny
    (h0, u0, v0), (hn, un, vn), (h2, u2, v2), (h1, u1, v1) = m.role(0), m.role(1), m.role(2), m.role(3)
    C, CE, CW = slice(WEST, WEST + nx), slice(WEST + 1, WEST + nx + 1), slice(WEST - 1, WEST + nx - 1)
    R, RN, RS = slice(1, ny + 1), slice(2, ny + 2), slice(0, ny)
    c = slice(0, ny)
    ut = E0 * u0 + E1 * u1 + E2 * u2
    vt = E0 * v0 + E1 * v1 + E2 * v2
    D = (ut[R, CE] - ut[R, C]) * m.per_dx_c[c] + (vt[RN, C] * m.div_north[c] - vt[R, C] * m.div_south[c])
    brake = 1 + 0.5 * m.kappa * m.dt
    keep, drain = (1 - 0.5 * m.kappa * m.dt) / brake, (m.dt * m.H) / brake
    hn[R, C] = keep * h0[R, C] - drain * D
    m.wrap(hn)
    head = np.zeros_like(h0)
    head[R, C] = (
        m.g * P1 * hn[R, C] + m.g * P0 * h0[R, C] + (m.g * PM1 * h1[R, C] + m.g * PM2 * h2[R, C]) - m.A * D
    )
    m.wrap(head)
    # Corners: rows 0 ... ny, columns 0 ... nx.
    Q, QS, E, W = slice(1, ny + 2), slice(0, ny + 1), slice(WEST, WEST + nx + 1), slice(WEST - 1, WEST + nx)
    spin = np.zeros_like(h0)
    spin[Q, E] = m.A * (
        (vt[Q, E] - vt[Q, W]) * m.per_dx_v - (ut[Q, E] * m.curl_north - ut[QS, E] * m.curl_south)
    )
    spin *= m.slip
    brake = 1 + 0.5 * m.r * m.dt
    keep, push = (1 - 0.5 * m.r * m.dt) / brake, m.dt / brake
    # v rows 1 ... ny - 1.
    V, VS, k = slice(2, ny + 1), slice(1, ny), slice(1, ny)
    turn = m.coriolis_v[k] * ((ut[VS, C] + ut[V, C]) + (ut[VS, CE] + ut[V, CE]))
    pressure = (head[VS, C] - head[V, C]) * (1 / m.dy)
    friction = (spin[V, CE] - spin[V, C]) * m.per_dx_v[k]
    stress = part(m.stress("y", factors, 1 / (m.rho * m.H)), k, C)
    vn[V, C] = m.mask_v[V, C] * (keep * v0[V, C] + push * (pressure - turn + friction + stress))
    m.wrap(vn)
    west = m.coriolis_south[c] * vt[R, CW] + m.coriolis_north[c] * vt[RN, CW]
    turn = west + (m.coriolis_south[c] * vt[R, C] + m.coriolis_north[c] * vt[RN, C])
    pressure = (head[R, CW] - head[R, C]) * m.per_dx_c[c]
    friction = (spin[R, C] - spin[RN, C]) * (1 / m.dy)
    stress = part(m.stress("x", factors, 1 / (m.rho * m.H)), c, C)
    un[R, C] = m.mask_u[R, C] * (keep * u0[R, C] + push * (pressure + turn + friction + stress))
    m.wrap(un)


class LinearOut:
    """The same without a temporary array: every operation writes into one made here."""

    def __init__(self, m):
        full = lambda: np.zeros((m.ny + 3, m.pitch))
        self.ut, self.vt, self.head, self.spin, self.scratch = full(), full(), full(), full(), full()
        cells, corners = (m.ny, m.nx), (m.ny + 1, m.nx + 1)
        self.D, self.a, self.b = np.zeros(cells), np.zeros(cells), np.zeros(cells)
        self.qa, self.qb = np.zeros(corners), np.zeros(corners)

    def __call__(self, m, factors):
        nx, ny = m.nx, m.ny
        (h0, u0, v0), (hn, un, vn), (h2, u2, v2), (h1, u1, v1) = m.role(0), m.role(1), m.role(2), m.role(3)
        C, CE, CW = slice(WEST, WEST + nx), slice(WEST + 1, WEST + nx + 1), slice(WEST - 1, WEST + nx - 1)
        R, RN = slice(1, ny + 1), slice(2, ny + 2)
        c = slice(0, ny)
        add, sub, mul = np.add, np.subtract, np.multiply
        ut, vt, head, spin, D, a, b = self.ut, self.vt, self.head, self.spin, self.D, self.a, self.b
        for out, now, previous, before in ((ut, u0, u1, u2), (vt, v0, v1, v2)):
            mul(now, E0, out=out)
            mul(previous, E1, out=self.scratch)
            add(out, self.scratch, out=out)
            mul(before, E2, out=self.scratch)
            add(out, self.scratch, out=out)
        sub(ut[R, CE], ut[R, C], out=D)
        mul(D, m.per_dx_c[c], out=D)
        mul(vt[RN, C], m.div_north[c], out=a)
        mul(vt[R, C], m.div_south[c], out=b)
        sub(a, b, out=a)
        add(D, a, out=D)
        brake = 1 + 0.5 * m.kappa * m.dt
        mul(h0[R, C], (1 - 0.5 * m.kappa * m.dt) / brake, out=a)
        mul(D, (m.dt * m.H) / brake, out=b)
        sub(a, b, out=hn[R, C])
        m.wrap(hn)
        mul(hn[R, C], m.g * P1, out=a)
        mul(h0[R, C], m.g * P0, out=b)
        add(a, b, out=a)
        mul(h1[R, C], m.g * PM1, out=b)
        mul(h2[R, C], m.g * PM2, out=head[R, C])
        add(b, head[R, C], out=b)
        add(a, b, out=a)
        mul(D, m.A, out=b)
        sub(a, b, out=head[R, C])
        m.wrap(head)
        Q, QS, E, W = slice(1, ny + 2), slice(0, ny + 1), slice(WEST, WEST + nx + 1), slice(WEST - 1, WEST + nx)
        qa, qb = self.qa, self.qb
        mul(ut[Q, E], m.curl_north, out=qa)
        mul(ut[QS, E], m.curl_south, out=qb)
        sub(qa, qb, out=qa)
        sub(vt[Q, E], vt[Q, W], out=qb)
        mul(qb, m.per_dx_v, out=qb)
        sub(qb, qa, out=qa)
        mul(qa, m.A, out=qa)
        mul(qa, m.slip[Q, E], out=spin[Q, E])
        brake = 1 + 0.5 * m.r * m.dt
        keep, push = (1 - 0.5 * m.r * m.dt) / brake, m.dt / brake
        V, VS, k = slice(2, ny + 1), slice(1, ny), slice(1, ny)
        a, b = self.a[1:], self.b[1:]
        sub(head[VS, C], head[V, C], out=a)
        mul(a, 1 / m.dy, out=a)
        D = self.D[1:]
        add(ut[VS, C], ut[V, C], out=b)
        add(ut[VS, CE], ut[V, CE], out=D)
        add(b, D, out=b)
        mul(b, m.coriolis_v[k], out=b)
        sub(a, b, out=a)
        sub(spin[V, CE], spin[V, C], out=b)
        mul(b, m.per_dx_v[k], out=b)
        add(a, b, out=a)
        add(a, part(m.stress("y", factors, 1 / (m.rho * m.H)), k, C), out=a)
        mul(a, push, out=a)
        mul(v0[V, C], keep, out=b)
        add(b, a, out=a)
        mul(a, m.mask_v[V, C], out=vn[V, C])
        m.wrap(vn)
        a, b, D = self.a, self.b, self.D
        sub(head[R, CW], head[R, C], out=a)
        mul(a, m.per_dx_c[c], out=a)
        mul(vt[R, CW], m.coriolis_south[c], out=b)
        mul(vt[RN, CW], m.coriolis_north[c], out=D)
        add(b, D, out=b)
        mul(vt[R, C], m.coriolis_south[c], out=D)
        mul(vt[RN, C], m.coriolis_north[c], out=self.scratch[R, C])
        add(D, self.scratch[R, C], out=D)
        add(b, D, out=b)
        add(a, b, out=a)
        sub(spin[R, C], spin[RN, C], out=b)
        mul(b, 1 / m.dy, out=b)
        add(a, b, out=a)
        add(a, part(m.stress("x", factors, 1 / (m.rho * m.H)), c, C), out=a)
        mul(a, push, out=a)
        mul(u0[R, C], keep, out=b)
        add(b, a, out=a)
        mul(a, m.mask_u[R, C], out=un[R, C])
        m.wrap(un)
