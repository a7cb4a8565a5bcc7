import { magnitude, type Vec3 } from '$lib/magnetics/vector';
import { add, ZERO } from '$lib/magnetics/vector';
import { noteBits, notesOf } from '$lib/drift/codec';
import type { HourParts, HourRecord } from '$lib/drift/types';
import { insertTuples, numeral, select, type Sql } from './bulk';

/** A closed hour as stored: its record and, while vacant, its parts. */
export interface StoredHour {
	nodeId: number;
	record: HourRecord;
	parts: HourParts | null;
}

const PARTS = [
	['temperature', 'temperatureMg'],
	['geomagnetic', 'geomagneticMg'],
	['bridge', 'bridgeMg'],
	['film', 'filmMg'],
	['surroundings', 'surroundingsMg'],
	['unexplained', 'unexplainedMg']
] as const;
const AXES = ['x', 'y', 'z'] as const;
const axisColumns = (name: string) => AXES.map((axis) => `${name}_${axis}_ug`);
const PART_COLUMNS = [...PARTS.map(([column]) => column), 'error'].flatMap(axisColumns);
const COLUMNS = [
	'node_id',
	'hour_ms',
	'n',
	'stay_from_ms',
	'temp_cc',
	...axisColumns('field'),
	...axisColumns('offset'),
	...PART_COLUMNS,
	'notes'
];

/** What a column holds at the most: an inverted film moves a field by twice its size, no further. */
const MOST_UG = 8_388_607;
const ug = (mg: number): number => Math.min(MOST_UG, Math.max(-MOST_UG, Math.round(mg * 1000)));
const ugs = (v: Vec3 | null): (number | null)[] =>
	v === null ? [null, null, null] : [ug(v[0]), ug(v[1]), ug(v[2])];

function tuple({ nodeId, record, parts }: StoredHour): string {
	const values = [
		nodeId,
		record.hourMs,
		Math.min(65_535, record.n),
		record.stay === null ? null : Number(record.stay) * 1000,
		record.tempC === null ? null : Math.round(record.tempC * 100),
		...ugs(record.fieldMg),
		...ugs(record.offsetMg),
		...PARTS.flatMap(([, name]) => ugs(parts?.[name] ?? null)),
		...ugs(parts?.errorMg ?? null),
		parts === null ? 0 : noteBits(parts.notes)
	];
	return `(${values.map(numeral).join(',')})`;
}

export async function write(sql: Sql, hours: readonly StoredHour[]): Promise<void> {
	await insertTuples(
		sql,
		`INSERT INTO drift_hour (${COLUMNS.join(',')})`,
		hours.map(tuple),
		`ON DUPLICATE KEY UPDATE ${COLUMNS.slice(2)
			.map((column) => `${column} = VALUES(${column})`)
			.join(', ')}`
	);
}

type Raw = Record<string, number | null>;

const vector = (row: Raw, name: string): Vec3 | null => {
	const [x, y, z] = axisColumns(name).map((column) => row[column] ?? null);
	return x === null ||
		y === null ||
		z === null ||
		x === undefined ||
		y === undefined ||
		z === undefined
		? null
		: [x / 1000, y / 1000, z / 1000];
};

function toStored(row: Raw): StoredHour {
	const tempC = row['temp_cc'] === null ? null : (row['temp_cc'] ?? 0) / 100;
	const stayFromMs = row['stay_from_ms'] ?? null;
	const hourMs = row['hour_ms'] ?? 0;
	const record: HourRecord = {
		hourMs,
		fieldMg: vector(row, 'field') ?? ZERO,
		offsetMg: vector(row, 'offset') ?? ZERO,
		tempC,
		n: row['n'] ?? 0,
		stay: stayFromMs === null ? null : String(stayFromMs / 1000)
	};
	const part = (name: string) => vector(row, name) ?? ZERO;
	if (vector(row, 'unexplained') === null)
		return { nodeId: row['node_id'] ?? 0, record, parts: null };
	const six = PARTS.map(([column, name]) => [name, part(column)] as const);
	const parts = {
		...(Object.fromEntries(six) as Record<(typeof PARTS)[number][1], Vec3>),
		...{ hourMs, tempC, errorMg: vector(row, 'error'), notes: notesOf(row['notes'] ?? 0) },
		totalMg: six.map(([, v]) => v).reduce(add, ZERO)
	};
	return { nodeId: row['node_id'] ?? 0, record, parts };
}

/** Closed hours of one node in [fromMs, toMs), by time. */
export async function ofNode(
	sql: Sql,
	nodeId: number,
	fromMs: number,
	toMs: number
): Promise<StoredHour[]> {
	const rows = await select<Raw>(
		sql,
		`SELECT ${COLUMNS.join(', ')} FROM drift_hour WHERE node_id = ? AND hour_ms >= ? AND hour_ms < ? ORDER BY hour_ms`,
		[nodeId, fromMs, toMs]
	);
	return rows.map(toStored);
}

/** Length of a vector rounded for people and programs: 0.01 mG. */
export const roundedMg = (v: Vec3): number => Math.round(magnitude(v) * 100) / 100;
