/** A case of the proof: what the report says about it before any number. */
export interface CaseInfo {
  title: string;
  /** Published source, as remembered and derived anew for this project where it says so; or `common practice`. */
  source: string;
  /** What is set up, and what ought to come out. */
  about: string;
}

/** Every case, in the order of the report. A case without a check that was reached fails the report. */
export const CATALOGUE = {
  a: {
    title: 'Equatorial Kelvin pulse',
    source: 'Matsuno (1966), J. Meteorol. Soc. Japan 44, 25–43; Gill (1982), Atmosphere–Ocean Dynamics, § 11.5',
    about: 'A pulse trapped as exp(−βy²/2c) moves east at c = 2.5 m/s without change of shape, in a periodic channel.',
  },
  b: {
    title: 'Equatorial wave modes',
    source: 'Matsuno (1966), eq. 8',
    about:
      'Rossby, mixed Rossby-gravity and inertia-gravity modes of one wavelength of 4000 km keep the frequencies of ω² − k² − k/ω = 2n + 1. The scheme is always slow for Rossby waves.',
  },
  d: {
    title: 'Geostrophic adjustment of a step',
    source: 'Rossby (1938), J. Mar. Res. 1, 239–263; Gill (1982), § 7.2',
    about: 'A step of the interface adjusts to 1 − exp(−|y|/λ); a third of the potential energy lost stays as motion.',
  },
  e: {
    title: 'Stommel gyre',
    source: 'Stommel (1948), Trans. Am. Geophys. Union 29, 202–206; closed form derived for this project',
    about: 'Wind-driven gyre with Rayleigh drag r = 1e-6 1/s on 2000 × 2000 km, steady after 1.9 years.',
  },
  f: {
    title: 'Munk gyre, no slip in the west and east',
    source: 'Munk (1950), J. Meteorol. 7, 79–93; boundary-value problem solved for this project',
    about: 'As the Stommel gyre with viscosity A = 2000 m²/s in place of drag; free slip in the north and south.',
  },
  "f'": {
    title: 'Munk gyre, free slip',
    source: 'Munk (1950); boundary-value problem solved for this project',
    about: 'As case f with free slip on every wall.',
  },
  g: {
    title: 'Sverdrup interior',
    source: 'Sverdrup (1947), Proc. Natl. Acad. Sci. 33, 318–326',
    about: 'With r = 2e-7 1/s the middle of the gyre carries curl τ/(ρ0 β), less friction’s own share of 2.4 %.',
  },
  h: {
    title: 'Wind without pumping, τx = a y',
    source: 'Common practice; derived for this project',
    about:
      'Stress linear in latitude about the equator pumps nothing and still carries V = −a/(ρ0 β) across it; steady, seasonal, and switched on at once.',
  },
  i: {
    title: 'Yoshida jet',
    source: 'Yoshida (1959), J. Oceanogr. Soc. Japan 15, 159–170; integral derived for this project',
    about: 'Uniform eastward wind accelerates an equatorial jet; its acceleration across the equator is an integral.',
  },
  j: {
    title: 'Annual Rossby wave off an eastern coast',
    source: 'Linear long-wave theory; dispersion relation derived for this project',
    about:
      'Yearly pumping of a mid-latitude basin radiates Rossby waves from its eastern coast; a sponge takes them up in the west.',
  },
  k: {
    title: 'Damped response to a wind patch',
    source:
      'Idea of Gill (1980), Q. J. R. Meteorol. Soc. 106, 447–462; boundary-value problems solved for this project',
    about: 'Equatorial wind patch, r = κ = 0.1/T: the steady response, wavenumber by wavenumber.',
  },
  l: {
    title: 'Steady zonal flow in a latitude band, nonlinear',
    source: 'Williamson et al. (1992), J. Comput. Phys. 102, 211–224, test case 2',
    about: 'Solid-body flow in gradient balance between walls at ±60° stays as it is for five days.',
  },
  m: {
    title: 'Coastal Kelvin wave',
    source: 'Gill (1982), § 10.4; discrete decay derived for this project',
    about: 'On an f-plane a wave along a wall moves at c and decays away from it by (1 − dy/2λ)/(1 + dy/2λ) a cell.',
  },
  n: {
    title: 'Budgets of mass and energy',
    source: 'Identities derived for this project',
    about: 'Terms are made by the scheme’s own operators, step by step, and sum to the change of the content.',
  },
  o: {
    title: 'Grid convergence index',
    source: 'Roache (1994), J. Fluids Eng. 116, 405–413',
    about: 'Richardson extrapolation and the index on three grids of case k.',
  },
  q: {
    title: 'Transport decomposition',
    source: 'Identities derived for this project',
    about: 'Ekman, geostrophic and other parts of the transport across a section sum to it exactly.',
  },
  r1: {
    title: 'Nonlinear simple wave',
    source: 'Method of characteristics; Riemann (1860)',
    about:
      'A wave of finite amplitude steepens along its characteristics, without rotation, to half its breaking time.',
  },
  r2: {
    title: 'Outcropping layer',
    source: 'Common practice',
    about:
      'A double gyre that thins to nothing is stopped with a reason when nothing protects it, and finishes when entrainment or a stress floor does.',
  },
  s: {
    title: 'Order in time on a fixed grid',
    source:
      'Shchepetkin & McWilliams (2005), Ocean Modelling 9, 347–404 (from memory); orders derived for this project',
    about: 'Errors against a run with a far smaller step fall fourfold as the step is halved.',
  },
  t: {
    title: 'Stability limits',
    source: 'Von Neumann analysis for this project',
    about: 'Noise for 4000 steps: stable just below the limits that preflight keeps, blown up just above.',
  },
  u: {
    title: 'Conservation with any coast',
    source: 'Sadourny (1975), J. Atmos. Sci. 32, 680–689; identities derived for this project',
    about: 'Random land and random states, on a plane and on a latitude band: mass and energy have no source.',
  },
  v: {
    title: 'Restart, and any output interval',
    source: 'Derived for this project',
    about: 'A run that is cut, restored, extended or recorded otherwise ends in the same bits.',
  },
  w: {
    title: 'Two kernels, one result',
    source: 'Derived for this project',
    about: 'The readable stepper and the compiled one give the same bits.',
  },
  x: {
    title: 'The Corvane setup',
    source: 'Independent code of the same equations',
    about: 'The demonstration’s control run over four years.',
  },
  y: {
    title: 'Facts of the trade',
    source: 'Common practice',
    about: 'Which way water moves, and that a linear run is linear.',
  },
} as const satisfies Record<string, CaseInfo>;

export type CaseId = keyof typeof CATALOGUE;
