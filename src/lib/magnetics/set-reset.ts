import { add, scale, subtract, type Vec3 } from './vector';

/**
 * SET/RESET flipping (method 2): a bridge reads r = p m B + O, with p = +1 after SET, -1 after RESET, m the
 * film's gain (1 after a pulse) and O the offset of bridge and electronics. Any unit; mG as a rule.
 */

/** Field from a pair: half the difference. Unchanged by a constant on both; negated when they are swapped. */
export const pairField = (set: Vec3, reset: Vec3): Vec3 => scale(subtract(set, reset), 0.5);

/** Offset from a pair: half the sum (check-values 5b). */
export const pairOffset = (set: Vec3, reset: Vec3): Vec3 => scale(add(set, reset), 0.5);

/** Field of one reading with the offset in use: B = p (r - O). */
export const fieldOf = (raw: Vec3, polarity: 1 | -1, offset: Vec3): Vec3 =>
	scale(subtract(raw, offset), polarity);

/** The reading that a field gives: r = p B + O. */
export const rawOf = (field: Vec3, polarity: 1 | -1, offset: Vec3): Vec3 =>
	add(scale(field, polarity), offset);

/**
 * What the film had lost until a pulse healed it: the field as read before less the field after, with one
 * offset (a pulse does not change it). Never from the pair alone, which measures the healed sensor.
 */
export const filmLoss = (before: Vec3, after: Vec3): Vec3 => subtract(before, after);

/** Offset brought to reference temperature: O° = O - k_O (T - T_ref), k_O in the field's unit per °C. */
export const offsetAtReference = (
	offset: Vec3,
	slopePerC: Vec3,
	tempC: number,
	referenceC: number
): Vec3 => subtract(offset, scale(slopePerC, tempC - referenceC));

/** Field of a pair brought to reference temperature: B° = B / (1 + κ (T - T_ref)). */
export const fieldAtReference = (
	field: Vec3,
	sensitivityTempcoPerC: number,
	tempC: number,
	referenceC: number
): Vec3 => scale(field, 1 / (1 + sensitivityTempcoPerC * (tempC - referenceC)));
