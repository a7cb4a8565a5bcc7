import { robustSigma } from '$lib/numeric/mad';
import { median } from '$lib/numeric/quantile';
import { magnitude, subtract, ZERO, type Vec3 } from '$lib/magnetics/vector';
import type { DriftSettings } from './params';

/** What one node says of the site's geomagnetic change in one hour, in its heading-free frame. */
export interface LineVote {
	/** What its level has moved since its reference less temperature and all that pairs have explained. */
	residualMg: Vec3;
	/** What of it stood there on most of the last days: the node's own, not the site's. */
	ownMg: Vec3;
}

export type LineVerdict = 'known' | 'few_nodes' | 'cause_not_known';

/** The site's geomagnetic change (h, e, z); zero unless known. */
export interface SiteLine {
	verdict: LineVerdict;
	changeMg: Vec3;
	/** Largest of the three components' robust spread. */
	spreadMg: number | null;
	nodes: number;
}

function column(vectors: readonly Vec3[], of: (values: number[]) => number): Vec3 {
	const axis = (i: 0 | 1 | 2) => of(vectors.map((v) => v[i]));
	return [axis(0), axis(1), axis(2)];
}

interface Agreement {
	changeMg: Vec3;
	spreadMg: number;
}

function agreement(vectors: readonly Vec3[]): Agreement {
	return {
		changeMg: column(vectors, median),
		spreadMg: Math.max(...column(vectors, robustSigma))
	};
}

/**
 * Component-wise median over the nodes (method 5.2). Where nodes have wandered apart over months their plain
 * spread would silence the line for ever; then each node's own standing residual is taken out first, which
 * keeps storms and daily variation and loses only what all nodes share for a week. The spread allowed grows
 * with the change: steel near the nodes turns their frames by some degrees, which scatters a large storm.
 */
export function siteLine(votes: readonly LineVote[], settings: DriftSettings): SiteLine {
	const nodes = votes.length;
	if (nodes < settings.lineNodes)
		return { verdict: 'few_nodes', changeMg: ZERO, spreadMg: null, nodes };
	const plain = agreement(votes.map(({ residualMg }) => residualMg));
	const found = plain.spreadMg <= settings.lineSpreadMg ? plain : closer(plain, votes);
	const sizeMg = magnitude(found.changeMg);
	const allowedMg = Math.max(settings.lineSpreadMg, settings.lineSpreadShare * sizeMg);
	if (found.spreadMg <= allowedMg && sizeMg <= settings.lineLimitMg)
		return { verdict: 'known', ...found, nodes };
	return { verdict: 'cause_not_known', changeMg: ZERO, spreadMg: found.spreadMg, nodes };
}

/** The same less what each node has had for a week, if they agree better so. */
function closer(plain: Agreement, votes: readonly LineVote[]): Agreement {
	const own = agreement(votes.map(({ residualMg, ownMg }) => subtract(residualMg, ownMg)));
	return own.spreadMg < plain.spreadMg ? own : plain;
}
