"""The nonlinear step in NumPy, on whole arrays."""
import numpy as np

from linear import E0, E1, E2, P0, P1, PM1, PM2, WEST, part


class Windows:
    """Slices of padded arrays: cells and their neighbours, corners, inner v rows."""

    def __init__(self, m):
        nx, ny = m.nx, m.ny
        self.C, self.CE, self.CW = slice(WEST, WEST + nx), slice(WEST + 1, WEST + nx + 1), slice(WEST - 1, WEST + nx - 1)
        self.R, self.RN, self.RS = slice(1, ny + 1), slice(2, ny + 2), slice(0, ny)
        # Corners: rows 0 ... ny, columns 0 ... nx.
        self.Q, self.QS = slice(1, ny + 2), slice(0, ny + 1)
        self.E, self.W = slice(WEST, WEST + nx + 1), slice(WEST - 1, WEST + nx)
        # v rows 1 ... ny - 1, and the rows of numbers that go with them and with cells.
        self.V, self.VS, self.k, self.c = slice(2, ny + 1), slice(1, ny), slice(1, ny), slice(0, ny)


def detrained_of(m, entrained):
    """Basin mean of w_e where it is given back evenly; the sum is NumPy's own, so its last bits are."""
    if not (m.has_entrainment and m.detrainment):
        return 0.0
    wet = m.wet[1 : m.ny + 1, WEST : WEST + m.nx]
    return float((m.dx_c[: m.ny] * entrained * wet).sum() / (m.dx_c[: m.ny] * wet).sum())


def nonlinear_plain(m, factors):
    w = Windows(m)
    R, RN, RS, C, CE, CW, c = w.R, w.RN, w.RS, w.C, w.CE, w.CW, w.c
    (h0, u0, v0), (hn, un, vn), (h2, u2, v2), (h1, u1, v1) = m.role(0), m.role(1), m.role(2), m.role(3)
    ut = E0 * u0 + E1 * u1 + E2 * u2
    vt = E0 * v0 + E1 * v1 + E2 * v2
    ht = E0 * h0 + E1 * h1 + E2 * h2
    if m.hmin > 0:
        ht = m.wet * np.maximum(ht, m.hmin)
    m.wrap(ht)
    entrained = np.zeros_like(h0)
    if m.has_entrainment:
        lack = np.maximum(m.onset - ht, 0.0)
        entrained = lack * lack * (1 / (m.timescale * m.onset))
        m.wrap(entrained)
    flux_u, flux_v = np.zeros_like(h0), np.zeros_like(h0)
    hu, hv = np.zeros_like(h0), np.zeros_like(h0)
    hu[R, w.E] = 0.5 * (ht[R, w.W] + ht[R, w.E])
    hv[w.Q, C] = 0.5 * m.share_south * ht[w.QS, C] + 0.5 * m.share_north * ht[w.Q, C]
    flux_u[:] = ut * hu
    flux_v[:] = vt * hv
    m.wrap(flux_v)
    m.wrap(flux_u)
    raw = (vt[w.Q, w.E] - vt[w.Q, w.W]) * m.per_dx_v - (ut[w.Q, w.E] * m.curl_north - ut[w.QS, w.E] * m.curl_south)
    zeta = m.slip[w.Q, w.E] * raw
    water = m.share_south * (ht[w.QS, w.W] + ht[w.QS, w.E]) + m.share_north * (ht[w.Q, w.W] + ht[w.Q, w.E])
    q = (m.f + zeta) / (m.per_wet[w.Q, w.E] * water)
    turn_u, turn_v, spin = np.zeros_like(h0), np.zeros_like(h0), np.zeros_like(h0)
    turn_u[w.Q, w.E] = q * (flux_v[w.Q, w.W] + flux_v[w.Q, w.E])
    turn_v[w.Q, w.E] = q * (flux_u[w.QS, w.E] + flux_u[w.Q, w.E])
    spin[w.Q, w.E] = m.A * zeta
    # Continuity's fluxes are limited, those of turning are not.
    north, south, per_dx = m.div_north[c], m.div_south[c], m.per_dx_c[c]
    if m.hmin > 0:
        limit = np.ones_like(h0)
        zonal = (np.maximum(flux_u[R, CE], 0.0) - np.minimum(flux_u[R, C], 0.0)) * per_dx
        meridional = np.maximum(flux_v[RN, C], 0.0) * north - np.minimum(flux_v[R, C], 0.0) * south
        outflow = zonal + meridional
        supply = np.maximum(h0[R, C] - m.hmin, 0.0) * (1 / m.dt)
        limit[R, C] = np.where(outflow > supply, supply / outflow, 1.0)
        m.wrap(limit)
        flux_v[w.V, C] = flux_v[w.V, C] * np.where(flux_v[w.V, C] > 0, limit[w.VS, C], limit[w.V, C])
        flux_u[R, C] = flux_u[R, C] * np.where(flux_u[R, C] > 0, limit[R, CW], limit[R, C])
    m.wrap(flux_v)
    m.wrap(flux_u)
    u_w, u_e, v_s, v_n = ut[R, C], ut[R, CE], vt[R, C], vt[RN, C]
    D = (u_e - u_w) * per_dx + (v_n * north - v_s * south)
    O = (flux_u[R, CE] - flux_u[R, C]) * per_dx + (flux_v[RN, C] * north - flux_v[R, C] * south)
    K = 0.25 * (u_w * u_w + u_e * u_e + (v_s * v_s + v_n * v_n))
    half = 0.5 * m.dt
    push = m.dt / (1 + half * m.kappa)
    source = m.kappa * (m.H - h0[R, C]) - detrained_of(m, entrained[R, C])
    hn[R, C] = m.wet[R, C] * (h0[R, C] + push * (source + entrained[R, C] - O))
    m.wrap(hn)
    head = np.zeros_like(h0)
    head[R, C] = (
        m.g * P1 * hn[R, C] + m.g * P0 * h0[R, C] + (m.g * PM1 * h1[R, C] + m.g * PM2 * h2[R, C]) + K - m.A * D
    )
    m.wrap(head)
    V, VS, k = w.V, w.VS, w.k
    turn = 0.25 * (turn_v[V, C] + turn_v[V, CE])
    pressure = (head[VS, C] - head[V, C]) * (1 / m.dy)
    friction = (spin[V, CE] - spin[V, C]) * m.per_dx_v[k]
    stress = part(m.stress("y", factors, 1 / m.rho), k, C)
    G = pressure - turn + friction + stress / np.maximum(hv[V, C], m.stress_floor)
    carried = 0.5 * m.share_south[k] * entrained[VS, C] + 0.5 * m.share_north[k] * entrained[V, C]
    vn[V, C] = settle(m, m.mask_v[V, C], v0[V, C], G, carried, hv[V, C])
    m.wrap(vn)
    turn = m.turn_south[c] * turn_u[R, C] + m.turn_north[c] * turn_u[RN, C]
    pressure = (head[R, CW] - head[R, C]) * per_dx
    friction = (spin[R, C] - spin[RN, C]) * (1 / m.dy)
    stress = part(m.stress("x", factors, 1 / m.rho), c, C)
    G = pressure + turn + friction + stress / np.maximum(hu[R, C], m.stress_floor)
    carried = 0.5 * (entrained[R, CW] + entrained[R, C])
    un[R, C] = settle(m, m.mask_u[R, C], u0[R, C], G, carried, hu[R, C])
    m.wrap(un)


def settle(m, mask, now, G, carried, thickness):
    """Crank-Nicolson drag at r + w_e / h; land holds 0, whatever came out of dividing by no water there."""
    if m.has_entrainment:
        k = 0.5 * m.dt * (m.r + carried / thickness)
        new = ((1 - k) * now + m.dt * G) / (1 + k)
    else:
        brake = 1 + 0.5 * m.r * m.dt
        new = (1 - 0.5 * m.r * m.dt) / brake * now + m.dt / brake * G
    return np.where(mask > 0, new, 0.0)


class NonlinearOut:
    """The same without a temporary array of fields: every operation writes into one made here."""

    def __init__(self, m):
        full = lambda: np.zeros((m.ny + 3, m.pitch))
        names = "ut vt ht entrained hu hv flux_u flux_v limit turn_u turn_v spin head scratch"
        for name in names.split():
            setattr(self, name, full())
        cells, corners = (m.ny, m.nx), (m.ny + 1, m.nx + 1)
        self.a, self.b, self.d, self.flag = np.zeros(cells), np.zeros(cells), np.zeros(cells), np.zeros(cells, bool)
        self.qa, self.qb, self.zeta = np.zeros(corners), np.zeros(corners), np.zeros(corners)
        self.w = Windows(m)
        self.f_rows = m.f
        self.half_south, self.half_north = 0.5 * m.share_south, 0.5 * m.share_north
        self.dry_u = m.mask_u[self.w.R, self.w.C] == 0
        self.dry_v = m.mask_v[self.w.V, self.w.C] == 0

    def __call__(self, m, factors):
        w = self.w
        R, RN, C, CE, CW, c, Q, QS, E, W, V, VS, k = w.R, w.RN, w.C, w.CE, w.CW, w.c, w.Q, w.QS, w.E, w.W, w.V, w.VS, w.k
        (h0, u0, v0), (hn, un, vn), (h2, u2, v2), (h1, u1, v1) = m.role(0), m.role(1), m.role(2), m.role(3)
        add, sub, mul, div, maximum, minimum = np.add, np.subtract, np.multiply, np.divide, np.maximum, np.minimum
        ut, vt, ht, entrained, hu, hv = self.ut, self.vt, self.ht, self.entrained, self.hu, self.hv
        flux_u, flux_v, limit, scratch = self.flux_u, self.flux_v, self.limit, self.scratch
        turn_u, turn_v, spin, head = self.turn_u, self.turn_v, self.spin, self.head
        a, b, d, qa, qb, zeta = self.a, self.b, self.d, self.qa, self.qb, self.zeta
        for out, now, previous, before in ((ut, u0, u1, u2), (vt, v0, v1, v2), (ht, h0, h1, h2)):
            mul(now, E0, out=out)
            mul(previous, E1, out=scratch)
            add(out, scratch, out=out)
            mul(before, E2, out=scratch)
            add(out, scratch, out=out)
        if m.hmin > 0:
            maximum(ht, m.hmin, out=ht)
            mul(ht, m.wet, out=ht)
        m.wrap(ht)
        if m.has_entrainment:
            sub(m.onset, ht, out=scratch)
            maximum(scratch, 0.0, out=scratch)
            mul(scratch, scratch, out=entrained)
            mul(entrained, 1 / (m.timescale * m.onset), out=entrained)
            m.wrap(entrained)
        add(ht[R, W], ht[R, E], out=hu[R, E])
        mul(hu[R, E], 0.5, out=hu[R, E])
        mul(ht[QS, C], self.half_south, out=hv[Q, C])
        mul(ht[Q, C], self.half_north, out=scratch[Q, C])
        add(hv[Q, C], scratch[Q, C], out=hv[Q, C])
        mul(ut, hu, out=flux_u)
        mul(vt, hv, out=flux_v)
        m.wrap(flux_v)
        m.wrap(flux_u)
        sub(vt[Q, E], vt[Q, W], out=zeta)
        mul(zeta, m.per_dx_v, out=zeta)
        mul(ut[Q, E], m.curl_north, out=qa)
        mul(ut[QS, E], m.curl_south, out=qb)
        sub(qa, qb, out=qa)
        sub(zeta, qa, out=zeta)
        mul(zeta, m.slip[Q, E], out=zeta)
        add(ht[QS, W], ht[QS, E], out=qa)
        mul(qa, m.share_south, out=qa)
        add(ht[Q, W], ht[Q, E], out=qb)
        mul(qb, m.share_north, out=qb)
        add(qa, qb, out=qa)
        mul(qa, m.per_wet[Q, E], out=qa)
        add(zeta, self.f_rows, out=qb)
        div(qb, qa, out=qa)
        add(flux_v[Q, W], flux_v[Q, E], out=qb)
        mul(qa, qb, out=turn_u[Q, E])
        add(flux_u[QS, E], flux_u[Q, E], out=qb)
        mul(qa, qb, out=turn_v[Q, E])
        mul(zeta, m.A, out=spin[Q, E])
        north, south, per_dx = m.div_north[c], m.div_south[c], m.per_dx_c[c]
        if m.hmin > 0:
            maximum(flux_u[R, CE], 0.0, out=a)
            minimum(flux_u[R, C], 0.0, out=b)
            sub(a, b, out=a)
            mul(a, per_dx, out=a)
            maximum(flux_v[RN, C], 0.0, out=b)
            mul(b, north, out=b)
            minimum(flux_v[R, C], 0.0, out=d)
            mul(d, south, out=d)
            sub(b, d, out=b)
            add(a, b, out=a)
            sub(h0[R, C], m.hmin, out=b)
            maximum(b, 0.0, out=b)
            mul(b, 1 / m.dt, out=b)
            np.greater(a, b, out=self.flag)
            limit[R, C] = 1.0
            div(b, a, out=limit[R, C], where=self.flag)
            m.wrap(limit)
            for flux, rows, behind, here in (
                (flux_v, V, limit[VS, C], limit[V, C]),
                (flux_u, R, limit[R, CW], limit[R, C]),
            ):
                flag, share = self.flag[: here.shape[0]], a[: here.shape[0]]
                np.greater(flux[rows, C], 0.0, out=flag)
                np.copyto(share, here)
                np.copyto(share, behind, where=flag)
                mul(flux[rows, C], share, out=flux[rows, C])
        m.wrap(flux_v)
        m.wrap(flux_u)
        sub(flux_u[R, CE], flux_u[R, C], out=a)
        mul(a, per_dx, out=a)
        mul(flux_v[RN, C], north, out=b)
        mul(flux_v[R, C], south, out=d)
        sub(b, d, out=b)
        add(a, b, out=a)
        half = 0.5 * m.dt
        push = m.dt / (1 + half * m.kappa)
        sub(m.H, h0[R, C], out=b)
        mul(b, m.kappa, out=b)
        sub(b, detrained_of(m, entrained[R, C]), out=b)
        add(b, entrained[R, C], out=b)
        sub(b, a, out=a)
        mul(a, push, out=a)
        add(h0[R, C], a, out=a)
        mul(a, m.wet[R, C], out=hn[R, C])
        m.wrap(hn)
        # Head: pressure, kinetic energy, less the stretching part of the viscosity.
        mul(hn[R, C], m.g * P1, out=a)
        mul(h0[R, C], m.g * P0, out=b)
        add(a, b, out=a)
        mul(h1[R, C], m.g * PM1, out=b)
        mul(h2[R, C], m.g * PM2, out=d)
        add(b, d, out=b)
        add(a, b, out=a)
        mul(ut, ut, out=scratch)
        add(scratch[R, C], scratch[R, CE], out=b)
        mul(vt, vt, out=scratch)
        add(scratch[R, C], scratch[RN, C], out=d)
        add(b, d, out=b)
        mul(b, 0.25, out=b)
        add(a, b, out=a)
        sub(ut[R, CE], ut[R, C], out=b)
        mul(b, per_dx, out=b)
        mul(vt[RN, C], north, out=d)
        mul(vt[R, C], south, out=scratch[R, C])
        sub(d, scratch[R, C], out=d)
        add(b, d, out=b)
        mul(b, m.A, out=b)
        sub(a, b, out=head[R, C])
        m.wrap(head)
        a, b, d = self.a[1:], self.b[1:], self.d[1:]
        sub(head[VS, C], head[V, C], out=a)
        mul(a, 1 / m.dy, out=a)
        add(turn_v[V, C], turn_v[V, CE], out=b)
        mul(b, 0.25, out=b)
        sub(a, b, out=a)
        sub(spin[V, CE], spin[V, C], out=b)
        mul(b, m.per_dx_v[k], out=b)
        add(a, b, out=a)
        maximum(hv[V, C], m.stress_floor, out=b)
        div(part(m.stress("y", factors, 1 / m.rho), k, C), b, out=b)
        add(a, b, out=a)
        if m.has_entrainment:
            mul(entrained[VS, C], self.half_south[k], out=b)
            mul(entrained[V, C], self.half_north[k], out=d)
            add(b, d, out=b)
        self.settle(m, self.dry_v, v0[V, C], a, b, d, hv[V, C], vn[V, C])
        m.wrap(vn)
        a, b, d = self.a, self.b, self.d
        sub(head[R, CW], head[R, C], out=a)
        mul(a, per_dx, out=a)
        mul(turn_u[R, C], m.turn_south[c], out=b)
        mul(turn_u[RN, C], m.turn_north[c], out=d)
        add(b, d, out=b)
        add(a, b, out=a)
        sub(spin[R, C], spin[RN, C], out=b)
        mul(b, 1 / m.dy, out=b)
        add(a, b, out=a)
        maximum(hu[R, C], m.stress_floor, out=b)
        div(part(m.stress("x", factors, 1 / m.rho), c, C), b, out=b)
        add(a, b, out=a)
        if m.has_entrainment:
            add(entrained[R, CW], entrained[R, C], out=b)
            mul(b, 0.5, out=b)
        self.settle(m, self.dry_u, u0[R, C], a, b, d, hu[R, C], un[R, C])
        m.wrap(un)

    @staticmethod
    def settle(m, dry, now, G, carried, scratch, thickness, out):
        """Crank-Nicolson drag at r + w_e / h; overwrites G, carried and scratch; land holds 0."""
        if m.has_entrainment:
            np.divide(carried, thickness, out=carried)
            np.add(carried, m.r, out=carried)
            np.multiply(carried, 0.5 * m.dt, out=carried)
            np.subtract(1, carried, out=scratch)
            np.multiply(scratch, now, out=scratch)
            np.multiply(G, m.dt, out=G)
            np.add(scratch, G, out=scratch)
            np.add(carried, 1, out=carried)
            np.divide(scratch, carried, out=scratch)
        else:
            brake = 1 + 0.5 * m.r * m.dt
            np.multiply(G, m.dt / brake, out=G)
            np.multiply(now, (1 - 0.5 * m.r * m.dt) / brake, out=scratch)
            np.add(scratch, G, out=scratch)
        np.copyto(scratch, 0.0, where=dry)
        np.copyto(out, scratch)
