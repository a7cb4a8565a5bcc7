/** A bay that somebody was asked to see to. */
export interface OpenRequest {
	id: number;
	bay: string;
	reason: string;
	askedAt: string;
	takenAt: string | null;
	taker: { name: string; initials: string } | null;
	/** The person who looks at this page has it. */
	mine: boolean;
}

export const requestsByBay = (requests: readonly OpenRequest[]): ReadonlyMap<string, OpenRequest> =>
	new Map(requests.map((request) => [request.bay, request]));

/** Who has what, of the bays that somebody has. */
export const holdersByBay = (
	requests: readonly OpenRequest[]
): ReadonlyMap<string, { name: string; initials: string }> =>
	new Map(
		requests.flatMap((request) =>
			request.taker === null ? [] : [[request.bay, request.taker] as const]
		)
	);
