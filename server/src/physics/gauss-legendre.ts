/** Nodes and weights of a quadrature on [0, 1]. */
export interface Quadrature {
  readonly nodes: Float64Array;
  readonly weights: Float64Array;
}

/**
 * Gauss–Legendre rule with `count` points on [0, 1]; nodes by Newton's method on the Legendre polynomial, in ascending order.
 * Source: Abramowitz and Stegun, Handbook of Mathematical Functions (1964), 25.4.30.
 */
export function gaussLegendre(count: number): Quadrature {
  const nodes = new Float64Array(count);
  const weights = new Float64Array(count);
  for (let i = 0; i < (count + 1) >> 1; i++) {
    let x = Math.cos((Math.PI * (i + 0.75)) / (count + 0.5));
    let slope = 1;
    for (let step = 0; step < 100; step++) {
      let previous = 1;
      let value = x;
      for (let n = 2; n <= count; n++) {
        const next = ((2 * n - 1) * x * value - (n - 1) * previous) / n;
        previous = value;
        value = next;
      }
      slope = (count * (x * value - previous)) / (x * x - 1);
      const correction = value / slope;
      x -= correction;
      if (Math.abs(correction) < 1e-16) break;
    }
    const weight = 1 / ((1 - x * x) * slope * slope);
    nodes[i] = (1 - x) / 2;
    nodes[count - 1 - i] = (1 + x) / 2;
    weights[i] = weight;
    weights[count - 1 - i] = weight;
  }
  return { nodes, weights };
}
