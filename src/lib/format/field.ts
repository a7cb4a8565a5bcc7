import { words } from './messages';

/** Physical quantities as text: one place for rounding; the unit is always written. */
const notMeasured = () => words().notMeasured;

/** A number with so many decimals, as the language writes it, with a true minus: '−0.25', '−0,25'. */
export const decimal = (value: number, places: number): string =>
	value.toFixed(places).replace('-', '\u2212').replace('.', words().decimalSign);

/** Field in milligauss, whole above 100 mG, else one decimal: '412 mG', '8.4 mG'. */
export function milligauss(fieldMg: number | null): string {
	if (fieldMg === null) return notMeasured();
	return `${decimal(fieldMg, Math.abs(fieldMg) >= 100 ? 0 : 1)} mG`;
}
/** '21.5 °C' */
export const celsius = (tempC: number | null) =>
	tempC === null ? notMeasured() : `${decimal(tempC, 1)} °C`;
/** '3612 mV' */
export const millivolt = (batteryMv: number | null) =>
	batteryMv === null ? notMeasured() : `${batteryMv.toFixed(0)} mV`;
/** '−71 dBm' */
export const dbm = (rssiDbm: number | null) =>
	rssiDbm === null ? notMeasured() : `${decimal(rssiDbm, 0)} dBm`;
/** '12 m', '3.4 m' under 10 m. */
export const metres = (lengthM: number) => `${decimal(lengthM, Math.abs(lengthM) < 10 ? 1 : 0)} m`;
