/**
 * Elementary functions built from + - x / and sqrt only, which IEEE 754 rounds the same way on every host. The language
 * leaves `Math.exp`, `Math.log`, `Math.pow` and the trigonometric functions to the host, so tables built with them could
 * differ in the last bit between hosts and with them every cut. Accuracy: a few units in the last place (tests/base).
 */

const LN2_HIGH = 0.6931471803691238;
const LN2_LOW = 1.9082149292705877e-10;
export const PI = Math.PI;
const HALF_PI = PI / 2;
const SQRT_TWO_PI = 2.5066282746310002;

const LOWEST = -1022;
const HIGHEST = 1023;
/** 2^n for every normal exponent, by doubling and halving, which are exact. */
const POWERS_OF_TWO = Float64Array.from({ length: HIGHEST - LOWEST + 1 }, (_, i) => {
  let power = 1;
  for (let n = i + LOWEST; n > 0; n--) power *= 2;
  for (let n = i + LOWEST; n < 0; n++) power /= 2;
  return power;
});

const powerOfTwo = (n: number) => POWERS_OF_TWO[n - LOWEST] as number;

/** Largest normal exponent k with 2^k <= x, by bisection; the lowest for subnormal x. */
function exponentOf(x: number): number {
  let low = LOWEST;
  let high = HIGHEST + 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (powerOfTwo(middle) <= x) low = middle;
    else high = middle;
  }
  return low;
}

/** e^x. Reduction x = k ln 2 + r, |r| <= ln 2 / 2, then the Taylor series to the thirteenth power. */
export function exp(x: number): number {
  if (Number.isNaN(x)) return Number.NaN;
  if (x > 709.7) return Number.POSITIVE_INFINITY;
  if (x < -744) return 0;
  const k = Math.round(x / (LN2_HIGH + LN2_LOW));
  const r = x - k * LN2_HIGH - k * LN2_LOW;
  let sum = 1;
  for (let i = 13; i >= 1; i--) sum = 1 + (r * sum) / i;
  const half = (k - (k % 2)) / 2;
  return sum * powerOfTwo(half) * powerOfTwo(k - half);
}

/** Natural logarithm; -Infinity at zero, NaN below. Mantissa in [sqrt(1/2), sqrt(2)), then the atanh series. */
export function log(x: number): number {
  if (!(x >= 0)) return Number.NaN;
  if (x === 0) return Number.NEGATIVE_INFINITY;
  if (x === Number.POSITIVE_INFINITY) return x;
  // subnormal numbers are first scaled up, exactly
  const lifted = x < powerOfTwo(LOWEST) ? 64 : 0;
  const scaled = x * powerOfTwo(lifted);
  let k = exponentOf(scaled);
  let m = scaled / powerOfTwo(k);
  k -= lifted;
  if (m > Math.SQRT2) {
    m /= 2;
    k += 1;
  }
  const t = (m - 1) / (m + 1);
  const t2 = t * t;
  let sum = 0;
  for (let n = 25; n >= 1; n -= 2) sum = 1 / n + t2 * sum;
  return k * LN2_HIGH + (2 * t * sum + k * LN2_LOW);
}

/** x^y for x >= 0. */
export function pow(x: number, y: number): number {
  if (y === 0) return 1;
  if (x === 0) return y > 0 ? 0 : Number.POSITIVE_INFINITY;
  return exp(y * log(x));
}

/** Arctangent, by two half-angle reductions and the alternating series. */
export function atan(x: number): number {
  if (Number.isNaN(x)) return Number.NaN;
  if (x < 0) return -atan(-x);
  if (x > 1) return HALF_PI - atan(1 / x);
  let t = x;
  for (let i = 0; i < 3; i++) t /= 1 + Math.sqrt(1 + t * t);
  const t2 = t * t;
  let sum = 0;
  for (let n = 25; n >= 1; n -= 2) sum = 1 / n - t2 * sum;
  return 8 * t * sum;
}

/** Angle of (x, y) in (-pi, pi]. */
export function atan2(y: number, x: number): number {
  if (x > 0) return atan(y / x);
  if (x < 0) return y >= 0 ? PI + atan(y / x) : atan(y / x) - PI;
  if (y === 0) return 0;
  return y > 0 ? HALF_PI : -HALF_PI;
}

/** Arccosine of x in [-1, 1]; values outside are clamped. */
export function acos(x: number): number {
  if (x >= 1) return 0;
  if (x <= -1) return PI;
  return atan2(Math.sqrt((1 - x) * (1 + x)), x);
}

/** Sine and cosine of an angle in radians, |angle| below about 1e5. */
export function sinCos(angle: number): { sin: number; cos: number } {
  const quadrant = Math.round(angle / HALF_PI);
  const r = angle - quadrant * 1.5707963267341256 - quadrant * 6.077100506506192e-11;
  const r2 = r * r;
  let s = 0;
  for (let n = 19; n >= 3; n -= 2) s = (r2 * (1 - s)) / (n * (n - 1));
  let c = 0;
  for (let n = 20; n >= 2; n -= 2) c = (r2 * (1 - c)) / (n * (n - 1));
  const sin = r * (1 - s);
  const cos = 1 - c;
  switch (((quadrant % 4) + 4) % 4) {
    case 0:
      return { sin, cos };
    case 1:
      return { sin: cos, cos: -sin };
    case 2:
      return { sin: -sin, cos: -cos };
    default:
      return { sin: -cos, cos: sin };
  }
}

export function sin(angle: number): number {
  return sinCos(angle).sin;
}

export function cos(angle: number): number {
  return sinCos(angle).cos;
}

/** Density of the standard normal law. */
export function normalDensity(z: number): number {
  return exp(-0.5 * z * z) / SQRT_TWO_PI;
}

/**
 * Distribution function of the standard normal law: the Taylor series about zero inside |z| < 3.5, the continued
 * fraction of Mills' ratio outside, so that the far tail keeps its relative accuracy.
 */
export function normalDistribution(z: number): number {
  if (z > 3.5) return 1 - upperTail(z);
  if (z < -3.5) return upperTail(-z);
  let term = z;
  let sum = z;
  for (let n = 3; n < 160; n += 2) {
    term *= (z * z) / n;
    sum += term;
    if (Math.abs(term) < 1e-17 * Math.abs(sum)) break;
  }
  return 0.5 + sum * normalDensity(z);
}

function upperTail(z: number): number {
  let fraction = z;
  for (let k = 60; k >= 1; k--) fraction = z + k / fraction;
  return normalDensity(z) / fraction;
}

/** Inverse of the standard normal distribution function, p in (0, 1). Newton on a rational first guess. */
export function normalQuantile(p: number): number {
  if (!(p > 0)) return Number.NEGATIVE_INFINITY;
  if (p >= 1) return Number.POSITIVE_INFINITY;
  const tail = p < 0.5 ? p : 1 - p;
  const t = Math.sqrt(-2 * log(tail));
  // Abramowitz and Stegun 26.2.23, |error| < 4.5e-4
  let z = t - (2.515517 + t * (0.802853 + t * 0.010328)) / (1 + t * (1.432788 + t * (0.189269 + t * 0.001308)));
  for (let i = 0; i < 4; i++) {
    const f = normalDistribution(-z) - tail;
    const step = f / normalDensity(z);
    // Halley's correction for the curvature of the tail
    z += step / (1 + 0.5 * z * step);
    if (Math.abs(step) < 1e-14 * (1 + z)) break;
  }
  return p < 0.5 ? -z : z;
}
