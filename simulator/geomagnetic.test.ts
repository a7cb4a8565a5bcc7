import { expect, test } from 'vitest';
import { addStorm, addVariation, parseIaga, recordedSeries } from './geomagnetic';
import { random } from './random';

const DAY_MIN = 1440;
/** The recording is played from its first minute where the clock's minute is a multiple of twice its length. */
const FROM_MS = 0;

const IAGA = [
	' Format                 IAGA-2002                                    |',
	'DATE       TIME         DOY     BOUH      BOUE      BOUZ      BOUF   |',
	'2016-01-01 00:00:00.000 001     20735.93    -99.77  47370.21  52248.63',
	'2016-01-01 00:01:00.000 001     20745.93    -89.77  47380.21  52248.72',
	'2016-01-01 00:02:00.000 001     99999.00  99999.00  99999.00  99999.00'
].join('\n');

test('IAGA-2002 rows become departures from their mean in mG, a missing minute repeats the last', () => {
	const [first, second, third] = parseIaga(IAGA);
	// Means over the three: 20742.5967 nT and so on; 100 nT are 1 mG.
	expect(second![0] - first![0]).toBeCloseTo(0.1, 9);
	expect(second![1] - first![1]).toBeCloseTo(0.1, 9);
	expect(third).toEqual(second);
});

test('the recording has the range and the steps that its source names', () => {
	const { north } = recordedSeries(FROM_MS, DAY_MIN);
	// SOURCE.md: 1 January, H range 103 nT; largest step from minute to minute 0.10 mG.
	const range = Math.max(...north) - Math.min(...north);
	expect(range).toBeGreaterThan(0.99);
	expect(range).toBeLessThan(1.07);
	const steps = [...north].map((h, i) => Math.abs(h - (north[i - 1] ?? h)));
	expect(Math.max(...steps)).toBeLessThan(0.105);
});

test('the recording has no seam where it turns round', () => {
	const long = recordedSeries(FROM_MS, 60 * DAY_MIN);
	const steps = [...long.north].map((h, i) => Math.abs(h - (long.north[i - 1] ?? h)));
	expect(Math.max(...steps)).toBeLessThan(0.105);
});

test('a storm stays under its peak and steps no further in a minute than it may', () => {
	for (let seed = 1; seed <= 20; seed++) {
		const series = recordedSeries(FROM_MS, DAY_MIN);
		const quiet = recordedSeries(FROM_MS, DAY_MIN);
		const storm = { fromMs: 3_600_000, durationMs: 43_200_000, peakMg: 20, stepMg: 7, steps: 5 };
		addStorm(series, storm, random(seed, 'storm'));
		const size = [...series.north].map((n, i) =>
			Math.hypot(n - quiet.north[i]!, series.east[i]! - quiet.east[i]!)
		);
		expect(Math.max(...size)).toBeLessThanOrEqual(20.0001);
		expect(Math.max(...size)).toBeGreaterThan(10);
		const north = (i: number) => series.north[i]! - quiet.north[i]!;
		const east = (i: number) => series.east[i]! - quiet.east[i]!;
		const steps = size
			.slice(1)
			.map((_, i) => Math.hypot(north(i + 1) - north(i), east(i + 1) - east(i)));
		// Two steps may fall into one minute by chance; slow waves add a little.
		expect(Math.max(...steps)).toBeLessThan(15);
	}
});

test('between minutes the variation runs straight', () => {
	const series = recordedSeries(FROM_MS, 10);
	const sum: [number, number, number] = [0, 0, 0];
	addVariation(series, FROM_MS + 90_000, sum);
	expect(sum[0]).toBeCloseTo((series.north[1]! + series.north[2]!) / 2, 12);
});
