/** SHA-256 (FIPS 180-4), at once: WebCrypto's answers later, which an answer cannot wait for. */

const isPrime = (n) => {
  for (let d = 2; d * d <= n; d++) if (n % d === 0) return false;
  return true;
};
const primes = [];
for (let n = 2; primes.length < 64; n++) if (isPrime(n)) primes.push(n);

/** The first 32 bits of the fraction of a root of n, in whole numbers: the greatest r with r^power <= n * 2^(32 * power). */
function rootBits(n, power) {
  let root = 0n;
  for (let bit = 1n << 36n; bit; bit >>= 1n) if ((root + bit) ** BigInt(power) <= BigInt(n) << BigInt(32 * power)) root += bit;
  return Number(root & 0xffffffffn);
}

const START = primes.slice(0, 8).map((p) => rootBits(p, 2)), K = Int32Array.from(primes, (p) => rootBits(p, 3) | 0);
const W = new Int32Array(64), H = new Int32Array(8);

const turned = (x, n) => (x >>> n) | (x << (32 - n));

function block(view, at) {
  for (let t = 0; t < 16; t++) W[t] = view.getInt32(at + t * 4);
  for (let t = 16; t < 64; t++) {
    const x = W[t - 15], y = W[t - 2];
    W[t] = (W[t - 16] + (turned(x, 7) ^ turned(x, 18) ^ (x >>> 3)) + W[t - 7] + (turned(y, 17) ^ turned(y, 19) ^ (y >>> 10))) | 0;
  }
  let [a, b, c, d, e, f, g, h] = H;
  for (let t = 0; t < 64; t++) {
    const one = (h + (turned(e, 6) ^ turned(e, 11) ^ turned(e, 25)) + ((e & f) ^ (~e & g)) + K[t] + W[t]) | 0;
    const two = ((turned(a, 2) ^ turned(a, 13) ^ turned(a, 22)) + ((a & b) ^ (a & c) ^ (b & c))) | 0;
    h = g;
    g = f;
    f = e;
    e = (d + one) | 0;
    d = c;
    c = b;
    b = a;
    a = (one + two) | 0;
  }
  H[0] += a;
  H[1] += b;
  H[2] += c;
  H[3] += d;
  H[4] += e;
  H[5] += f;
  H[6] += g;
  H[7] += h;
}

/** @param {Uint8Array} bytes @returns {Uint8Array} the 32 bytes of their digest */
export function sha256(bytes) {
  const { length } = bytes, whole = length & ~63, rest = new Uint8Array(length - whole < 56 ? 64 : 128), end = new DataView(rest.buffer);
  H.set(START);
  const view = new DataView(bytes.buffer, bytes.byteOffset, length);
  for (let at = 0; at < whole; at += 64) block(view, at);
  rest.set(bytes.subarray(whole));
  rest[length - whole] = 0x80;
  end.setUint32(rest.length - 8, Math.floor(length / 0x20000000));
  end.setUint32(rest.length - 4, length << 3);
  for (let at = 0; at < rest.length; at += 64) block(end, at);
  const out = new DataView(new ArrayBuffer(32));
  H.forEach((word, i) => out.setInt32(i * 4, word));
  return new Uint8Array(out.buffer);
}
