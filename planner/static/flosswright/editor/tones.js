// Tones of undyed thread for slots that have no shade, light to dark, as patterns/pictures.py has
// them, so that the board and the drawn band look alike.

const LIGHTEST = [0xf1, 0xe9, 0xda];
const DARKEST = [0x5c, 0x54, 0x48];

const tone = (share) => "#" + LIGHTEST
  .map((light, channel) => Math.round(light + (DARKEST[channel] - light) * share).toString(16).padStart(2, "0"))
  .join("");

export function neutralColours(slots) {
  const used = [...new Set(slots)].sort();
  return Object.fromEntries(used.map((slot, at) => [slot, tone(at / Math.max(1, used.length - 1))]));
}
