import { random } from './random';

/** A site's weather as a closed formula of time, so that any node can be asked at any time. */
export interface Weather {
	meanC: number;
	/** Half the daily swing in the sealed housing, °C. */
	halfSwingC: number;
	/** Slow spells of days and passing clouds of an hour or two, half swings in °C. */
	spellC: number;
	cloudC: number;
	/** The course never leaves these, °C. */
	lowestC: number;
	highestC: number;
	/** Local time of the site less UTC, ms. */
	localOffsetMs: number;
	seed: number;
}

export interface NodeCourse {
	weather: Weather;
	/** How much of the swing this place sees (shade), and how late, ms. */
	share: number;
	lagMs: number;
	phases: readonly number[];
}

const DAY_MS = 86_400_000;
const TURN = 2 * Math.PI;
/** Warmest about 15 h, coldest about 5 h: the sum of a daily and a half-daily wave. */
const PEAK_DAY_SHARE = 15 / 24;
const SPELL_DAYS = [3.1, 7.7];
const CLOUD_HOURS = [0.9, 2.3];

export function nodeCourse(weather: Weather, nodeIndex: number): NodeCourse {
	const rng = random(weather.seed, 'course', nodeIndex);
	const spells = random(weather.seed, 'spells');
	return {
		weather,
		share: rng.between(0.85, 1),
		lagMs: rng.between(0, 2_400_000),
		// Spells are the site's, clouds pass node by node.
		phases: [
			spells.between(0, TURN),
			spells.between(0, TURN),
			rng.between(0, TURN),
			rng.between(0, TURN)
		]
	};
}

/** Temperature in a node's housing, °C. */
export function temperatureC(course: NodeCourse, atMs: number): number {
	const { weather, phases } = course;
	const day = (atMs - course.lagMs + weather.localOffsetMs) / DAY_MS;
	const angle = TURN * (day - PEAK_DAY_SHARE);
	const daily = 0.88 * Math.cos(angle) + 0.16 * Math.cos(2 * angle + 0.6);
	const spell =
		0.6 * Math.sin((TURN * day) / SPELL_DAYS[0]! + phases[0]!) +
		0.4 * Math.sin((TURN * day) / SPELL_DAYS[1]! + phases[1]!);
	const sun = Math.max(0, daily + 0.3);
	const cloud =
		sun *
		(0.6 * Math.sin((TURN * day * 24) / CLOUD_HOURS[0]! + phases[2]!) +
			0.4 * Math.sin((TURN * day * 24) / CLOUD_HOURS[1]! + phases[3]!));
	const value =
		weather.meanC +
		course.share * (weather.halfSwingC * daily + weather.cloudC * cloud) +
		weather.spellC * spell;
	return Math.min(weather.highestC, Math.max(weather.lowestC, value));
}
