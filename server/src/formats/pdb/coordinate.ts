import { scanFourDigits, scanWholePart } from '../../text/whole-part';

const POINT = 46;
const WIDTH = 8;
/** Makes a zero of the point, so that it and three digits are read as four. */
const POINT_TO_ZERO = 0x30 ^ POINT;

/**
 * Reads x, y and z as the format has them, each `%8.3f`: in four columns blanks, perhaps a minus sign, and at least one digit; then
 * the point and three digits. Writes them into `out` from `index` on, to the last bit what `Number()` gives. False where one is
 * anything else; `out` may have been written.
 */
export function readCoordinates(view: DataView, start: number, out: Float64Array, index: number): boolean {
  for (let axis = 0; axis < 3; axis++) {
    const field = start + axis * WIDTH;
    const whole = scanWholePart(view.getInt32(field, true));
    const fraction = view.getInt32(field + 4, true);
    const thousandths = (fraction & 255) === POINT ? scanFourDigits(fraction ^ POINT_TO_ZERO) : -1;
    if (whole < 0 || thousandths < 0) return false;
    const value = ((whole >>> 1) * 1000 + thousandths) / 1000;
    out[index + axis] = (whole & 1) === 0 ? value : -value;
  }
  return true;
}
