/** Colour arithmetic for the test over the tokens. */

const channels = (hex: string): number[] => [1, 3, 5].map((at) => parseInt(hex.slice(at, at + 2), 16) / 255);

/** sRGB to linear light, IEC 61966-2-1. */
const toLinear = (value: number) => (value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4);

const times = (matrix: number[][], vector: number[]) =>
  matrix.map((row) => row.reduce((sum, factor, index) => sum + factor * (vector[index] ?? 0), 0));

/** Contrast ratio of WCAG 2.2 ("relative luminance"). */
export function contrast(one: string, other: string): number {
  const luminance = (hex: string) => {
    const [red = 0, green = 0, blue = 0] = channels(hex).map(toLinear);
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue;
  };
  const [low = 0, high = 0] = [luminance(one), luminance(other)].sort((a, b) => a - b);
  return (high + 0.05) / (low + 0.05);
}

export type Deficiency = 'none' | 'protan' | 'deutan' | 'tritan';

/** Machado, Oliveira and Fernandes 2009, severity 1.0, on linear light. */
const simulations: Record<Deficiency, number[][]> = {
  none: [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  protan: [
    [0.152286, 1.052583, -0.204868],
    [0.114503, 0.786281, 0.099216],
    [-0.003882, -0.048116, 1.051998],
  ],
  deutan: [
    [0.367322, 0.860646, -0.227968],
    [0.280085, 0.672501, 0.047413],
    [-0.01182, 0.04294, 0.968881],
  ],
  tritan: [
    [1.255528, -0.076749, -0.178779],
    [-0.078411, 0.930809, 0.147602],
    [0.004733, 0.691367, 0.3039],
  ],
};

const toXyz = [
  [0.4124564, 0.3575761, 0.1804375],
  [0.2126729, 0.7151522, 0.072175],
  [0.0193339, 0.119192, 0.9503041],
];

/** A colour as somebody with a deficiency sees it, as CIE L*a*b* (D65). */
export function seenBy(deficiency: Deficiency, hex: string): number[] {
  const linear = times(simulations[deficiency], channels(hex).map(toLinear)).map((value) => Math.min(1, Math.max(0, value)));
  const [x = 0, y = 0, z = 0] = times(toXyz, linear).map((value, index) => {
    const ratio = value / ([0.95047, 1, 1.08883][index] ?? 1);
    return ratio > 216 / 24389 ? Math.cbrt(ratio) : (24389 / 27 / 116) * ratio + 16 / 116;
  });
  return [116 * y - 16, 500 * (x - y), 200 * (y - z)];
}

const radians = (degrees: number) => (degrees * Math.PI) / 180;

/** CIEDE2000 after Sharma, Wu and Dalal 2005, of two L*a*b* colours. */
export function distance([l1 = 0, a1 = 0, b1 = 0]: number[], [l2 = 0, a2 = 0, b2 = 0]: number[]): number {
  const meanChroma = (Math.hypot(a1, b1) + Math.hypot(a2, b2)) / 2;
  const g = 0.5 * (1 - Math.sqrt(meanChroma ** 7 / (meanChroma ** 7 + 25 ** 7)));
  const [ap1, ap2] = [a1 * (1 + g), a2 * (1 + g)];
  const [c1, c2] = [Math.hypot(ap1, b1), Math.hypot(ap2, b2)];
  const hue = (a: number, b: number) => (a === 0 && b === 0 ? 0 : ((Math.atan2(b, a) * 180) / Math.PI + 360) % 360);
  const [h1, h2] = [hue(ap1, b1), hue(ap2, b2)];
  const isGrey = c1 * c2 === 0;
  const dh = isGrey ? 0 : ((h2 - h1 + 540) % 360) - 180;
  const dH = 2 * Math.sqrt(c1 * c2) * Math.sin(radians(dh / 2));
  const meanL = (l1 + l2) / 2;
  const meanC = (c1 + c2) / 2;
  const meanH = isGrey ? h1 + h2 : Math.abs(h1 - h2) <= 180 ? (h1 + h2) / 2 : (h1 + h2 + (h1 + h2 < 360 ? 360 : -360)) / 2;
  const t =
    1 -
    0.17 * Math.cos(radians(meanH - 30)) +
    0.24 * Math.cos(radians(2 * meanH)) +
    0.32 * Math.cos(radians(3 * meanH + 6)) -
    0.2 * Math.cos(radians(4 * meanH - 63));
  const sL = 1 + (0.015 * (meanL - 50) ** 2) / Math.sqrt(20 + (meanL - 50) ** 2);
  const sC = 1 + 0.045 * meanC;
  const sH = 1 + 0.015 * meanC * t;
  const rC = 2 * Math.sqrt(meanC ** 7 / (meanC ** 7 + 25 ** 7));
  const rT = -Math.sin(radians(60 * Math.exp(-(((meanH - 275) / 25) ** 2)))) * rC;
  const [dL, dC, dHue] = [(l2 - l1) / sL, (c2 - c1) / sC, dH / sH];
  return Math.sqrt(dL ** 2 + dC ** 2 + dHue ** 2 + rT * dC * dHue);
}
