/** A column of a table: what it is called, what it sorts by and how it is written as text. */
export interface Column<Row> {
	key: string;
	title: string;
	/** Written small under the title: a unit or a time zone. */
	unit?: string;
	align?: 'left' | 'right';
	/** Missing: the column cannot be sorted. null sorts last in either direction. */
	sortBy?: (row: Row) => string | number | null;
	/** What the filter searches and what an unadorned cell shows. */
	text: (row: Row) => string;
	/** Codes, serials and times stay in one line. */
	tight?: boolean;
	/** Left out on narrow screens unless chosen. */
	minor?: boolean;
}

export interface Order {
	key: string;
	direction: 'ascending' | 'descending';
}

const natural = new Intl.Collator('en', { numeric: true, sensitivity: 'base' });

/** A new array in the order asked for; equal rows keep their order. */
export function sorted<Row>(
	rows: readonly Row[],
	columns: readonly Column<Row>[],
	order: Order | null
): Row[] {
	const sortBy = columns.find((column) => column.key === order?.key)?.sortBy;
	if (order === null || sortBy === undefined) return [...rows];
	const sign = order.direction === 'ascending' ? 1 : -1;
	return [...rows].sort((rowA, rowB) => {
		const [a, b] = [sortBy(rowA), sortBy(rowB)];
		if (a === null || b === null) return Number(a === null) - Number(b === null);
		const difference =
			typeof a === 'number' && typeof b === 'number'
				? a - b
				: natural.compare(String(a), String(b));
		return sign * difference;
	});
}

/** Rows in which every word of the filter occurs somewhere. */
export function filtered<Row>(
	rows: readonly Row[],
	columns: readonly Column<Row>[],
	filter: string
): Row[] {
	const words = filter
		.toLowerCase()
		.split(/\s+/)
		.filter((word) => word !== '');
	if (words.length === 0) return [...rows];
	return rows.filter((row) => {
		const all = columns.map((column) => column.text(row).toLowerCase()).join('\n');
		return words.every((word) => all.includes(word));
	});
}

/** First press ascending, second descending, third the order as given. */
export function nextOrder(order: Order | null, key: string): Order | null {
	if (order?.key !== key) return { key, direction: 'ascending' };
	return order.direction === 'ascending' ? { key, direction: 'descending' } : null;
}
