/** Repeatable pseudo-random numbers. */
export interface Random {
  /** Uniform in (0, 1). */
  next(): number;
  /** A positive number with the given mean; the larger the shape, the closer to it (Erlang). */
  around(mean: number, shape: number): number;
}

/** A linear congruential generator modulo 2³² with the constants of Numerical Recipes (from memory). */
export function seededRandom(seed: number): Random {
  let state = seed >>> 0;
  const next = () => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return (state + 0.5) / 2 ** 32;
  };
  return {
    next,
    around(mean, shape) {
      let logarithms = 0;
      for (let index = 0; index < shape; index++) logarithms += Math.log(next());
      return (-logarithms / shape) * mean;
    },
  };
}
