/**
 * Thermal averages over free rotation, in units of kT.
 * Two dipoles: Z(x) = ∫₀¹ sinh(xh)/(xh) dc, h = √(1 + 3c²), after integrating out three of the four angles.
 * An ion and a dipole: Z(y) = sinh(y)/y (Langevin).
 */
export interface Average {
  /** ⟨U⟩/kT. */
  energy: number;
  /** ln Z = −F/kT. */
  logZ: number;
}

/** Nodes and weights of Gauss–Legendre quadrature on [−1, 1], by Newton's iteration on the Legendre recurrence. */
export function gaussLegendre(n: number): { node: number; weight: number }[] {
  const points: { node: number; weight: number }[] = [];
  for (let i = 1; i <= n; i++) {
    let x = Math.cos((Math.PI * (i - 0.25)) / (n + 0.5));
    let slope = 1;
    for (let step = 0; step < 50; step++) {
      let previous = 1;
      let value = x;
      for (let k = 2; k <= n; k++) [previous, value] = [value, ((2 * k - 1) * x * value - (k - 1) * previous) / k];
      slope = (n * (x * value - previous)) / (x * x - 1);
      const change = value / slope;
      x -= change;
      if (Math.abs(change) < 1e-16) break;
    }
    points.push({ node: x, weight: 2 / ((1 - x * x) * slope * slope) });
  }
  return points;
}

const POINTS = gaussLegendre(200);

/** ∫ f over [from, to] with 200 points. */
function integrate(f: (c: number) => number, from: number, to: number): number {
  const half = (to - from) / 2;
  let sum = 0;
  for (const { node, weight } of POINTS) sum += weight * f(from + half * (1 + node));
  return sum * half;
}

/** sinh(t)/t − 1, by its series for small t. */
function sinhcMinusOne(t: number): number {
  if (t > 1) return Math.sinh(t) / t - 1;
  let term = 1;
  let sum = 0;
  for (let n = 1; n <= 12; n++) {
    term *= (t * t) / (2 * n * (2 * n + 1));
    sum += term;
  }
  return sum;
}

/** t · d/dt of sinh(t)/t, by its series for small t. */
function sinhcSlope(t: number): number {
  if (t > 1) return Math.cosh(t) - Math.sinh(t) / t;
  let term = 1;
  let sum = 0;
  for (let n = 1; n <= 12; n++) {
    term *= (t * t) / (2 * n * (2 * n + 1));
    sum += 2 * n * term;
  }
  return sum;
}

export function dipolePairAverage(x: number): Average {
  const h = (c: number) => Math.sqrt(1 + 3 * c * c);
  if (x < 20) {
    const excess = integrate((c) => sinhcMinusOne(x * h(c)), 0, 1);
    const slope = integrate((c) => sinhcSlope(x * h(c)), 0, 1);
    return { energy: -slope / (1 + excess), logZ: Math.log1p(excess) };
  }
  // The factor e^{2x} is taken out; below `from` the rest is under e^{−85} of its largest value.
  const from = Math.max(0, 1 - 60 / x);
  const value = (c: number) => {
    const t = x * h(c);
    return (Math.exp(t - 2 * x) - Math.exp(-t - 2 * x)) / (2 * t);
  };
  const slope = (c: number) => {
    const t = x * h(c);
    return (Math.exp(t - 2 * x) + Math.exp(-t - 2 * x)) / 2 - value(c);
  };
  const z = integrate(value, from, 1);
  return { energy: -integrate(slope, from, 1) / z, logZ: 2 * x + Math.log(z) };
}

export function ionDipoleAverage(y: number): Average {
  if (y < 1) {
    const excess = sinhcMinusOne(y);
    return { energy: -sinhcSlope(y) / (1 + excess), logZ: Math.log1p(excess) };
  }
  const small = Math.exp(-2 * y);
  return {
    energy: -((y * (1 + small)) / (1 - small) - 1),
    logZ: y - Math.log(2 * y) + Math.log1p(-small),
  };
}
