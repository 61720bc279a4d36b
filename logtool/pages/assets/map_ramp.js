// Colours that are even to the eye, and sizes of circles.
logtoolMap.ramp = (() => {
  // Our own anchors, in OKLCH: lightness, chroma, hue. Lightness runs one way, so the order also
  // shows without colour vision; hue goes from amber over red to blue-violet and so never meets green.
  const ANCHORS = {
    light: [[0.83, 0.135, 85], [0.66, 0.165, 42], [0.48, 0.155, 355], [0.29, 0.125, 285]],
    dark: [[0.64, 0.135, 288], [0.71, 0.15, 345], [0.82, 0.115, 45], [0.95, 0.10, 100]],
  };
  const STEPS = 24; // colours in use; finer steps could not be told apart
  const FINE = 600;
  const LARGEST_PX = 15; // radius of the sender with the most receptions
  const SMALLEST_PX = 2.5; // and of any, so that one can see it
  const FULL_SIZE_PX = 900; // maps at least this wide have circles of full size

  const lab = ([light, chroma, hue]) => {
    const turn = hue * Math.PI / 180;
    return [light, chroma * Math.cos(turn), chroma * Math.sin(turn)];
  };

  // B. Ottosson, "A perceptual color space for image processing", 2020: OKLab to sRGB, 0 to 255.
  function rgb([light, a, b]) {
    const l = (light + 0.3963377774 * a + 0.2158037573 * b) ** 3;
    const m = (light - 0.1055613458 * a - 0.0638541728 * b) ** 3;
    const s = (light - 0.0894841775 * a - 1.2914855480 * b) ** 3;
    const linear = [
      4.0767416621 * l - 3.3077115913 * m + 0.2309699292 * s,
      -1.2684380046 * l + 2.6097574011 * m - 0.3413193965 * s,
      -0.0041960863 * l - 0.7034186147 * m + 1.7076147010 * s,
    ];
    return linear.map((value) => {
      const clipped = Math.max(0, Math.min(1, value));
      const coded = clipped <= 0.0031308 ? 12.92 * clipped : 1.055 * clipped ** (1 / 2.4) - 0.055;
      return Math.round(255 * coded);
    });
  }

  const apart = (p, q) => Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]);

  // STEPS points at equal distances along the broken line through the anchors, in OKLab.
  function even(theme) {
    const anchors = ANCHORS[theme].map(lab);
    const fine = [];
    for (let i = 0; i <= FINE; i++) {
      const at = i / FINE * (anchors.length - 1), k = Math.min(anchors.length - 2, Math.floor(at));
      fine.push(anchors[k].map((value, j) => value + (anchors[k + 1][j] - value) * (at - k)));
    }
    const gone = [0];
    for (let i = 1; i <= FINE; i++) gone.push(gone[i - 1] + apart(fine[i], fine[i - 1]));
    const out = [];
    for (let step = 0, i = 0; step < STEPS; step++) {
      while (i < FINE && gone[i] < gone[FINE] * step / (STEPS - 1)) i++;
      out.push(fine[i]);
    }
    return out;
  }

  const colours = (theme) => even(theme).map((point) => `rgb(${rgb(point).join(",")})`);

  // The index of a value's colour on a scale from low to high.
  function step(value, low, high) {
    const share = high > low ? (value - low) / (high - low) : 0;
    return Math.round((STEPS - 1) * Math.max(0, Math.min(1, share)));
  }

  // A round number at or above the value.
  function roundUp(value) {
    if (!(value > 0)) return 1;
    const power = 10 ** Math.floor(Math.log10(value));
    return [1, 1.5, 2, 2.5, 3, 4, 5, 6, 8, 10].map((factor) => factor * power).find((number) => number >= value * (1 - 1e-9));
  }

  // How large circles are on a map of this width: less on a small one.
  const sizing = (mapPx) => Math.max(0.6, Math.min(1, mapPx / FULL_SIZE_PX));

  // Radius in px: area by receptions, but never too small to see.
  const radius = (receptions, most, size) => size * Math.max(SMALLEST_PX, LARGEST_PX * Math.sqrt(receptions / most));

  return { STEPS, LARGEST_PX, SMALLEST_PX, even, colours, step, roundUp, sizing, radius };
})();
