/** What is said of a setting inside a sentence: value in force with unit. */
export type Say = (name: string) => string;

export interface Rule {
	title: string;
	/** Sentences; a rule that has an example of the site's own names which. */
	text: (say: Say) => string[];
	example?: 'taken' | 'doubtful' | 'drifting';
}

export interface Chapter {
	title: string;
	/** Problem and idea. */
	lead: string;
	rules: readonly Rule[];
}

/**
 * The content of the READMEs of magnetics, detection and drift for people who run a site; thresholds are
 * those in force where it is read.
 */
export const CHAPTERS: readonly Chapter[] = [
	{
		title: 'From counts to a field',
		lead: 'A sensor in the ground gives counts. Between them and the field stand its scale, the direction in which its film was last magnetized, an offset of its own that is often larger than a vehicle, and temperature.',
		rules: [
			{
				title: 'Scale',
				text: () => [
					'How many counts make a gauss stands in the sensor’s profile, not in the program: two readings of the same data sheet differ by 2.4 %.',
					'A reading at the end of the range is clipped. Something overloads the sensor, and it says nothing of its bay until that ends.'
				]
			},
			{
				title: 'Pulses and pairs',
				text: () => [
					'A pulse magnetizes the film anew. A pair of pulses, one each way, measures the sensor’s own offset: half the sum of both readings is offset, half the difference is field.',
					'A pulse heals the film before it is measured. What the film had lost shows only as the field before less the field after.',
					'Until a first pair was accepted no direction is known: the rules on flipped film, gain, tilt, geomagnetic change and the Earth check are off, and say so.'
				]
			},
			{
				title: 'The Earth as a check',
				text: () => [
					'When a quiet field is learned its strength is held against the World Magnetic Model at the site and date. Steel in the ground bends it: 35 % off is a warning to look, not a refusal.',
					'A ratio near 4 or 1/4 means that the profile of the wrong resolution was chosen.'
				]
			}
		]
	},
	{
		title: 'When a bay is taken or free',
		lead: 'A vehicle comes in seconds and stands still; everything else that moves the field by as much takes hours, comes back at once, or moves a neighbour more. So steps between still levels are judged, not levels alone.',
		rules: [
			{
				title: 'The quiet field',
				text: (say) => [
					`A new node learns it from at least ${say('learnReadings')} over ${say('learnS')} with no more than ${say('learnSigmaMg')} of noise. A vehicle that stands still passes that test too, so a person says that they see the bay empty; without that it is provisional until the field has left and come back within ${say('returnMg')} on ${say('returnsToProve')}.`,
					`While the bay is free and still, the quiet field follows slow change within about ${say('baselineTauS')}. While it is taken it learns nothing, but follows temperature and the site’s geomagnetic change.`
				]
			},
			{
				title: 'Taken',
				text: (say) => [
					`The disturbance is how far the field stands from the quiet field. It must reach ${say('onMg')}, or ${say('onSigma')} of the sensor’s own noise if that is more, and stand still for ${say('stillS')} within ${say('stillMg')}.`,
					`At least ${say('stepRatio')} of the threshold must have come at once. What creeps over it makes the bay doubtful, not taken. Pulses that do not stand are passing traffic.`
				],
				example: 'taken'
			},
			{
				title: 'Free again',
				text: (say) => [
					`A departure undoes its arrival within ${say('undoRatio')} of it, or the disturbance falls under ${say('offRatio')} of the threshold, or under ${say('releaseRatio')} of what stood there in this stay.`
				]
			},
			{
				title: 'Gaps and silence',
				text: (say) => [
					`After more than ${say('gapMinS')} or ${say('gapPeriods')} without a reading it is not known how the field moved: the change must then be more than temperature and geomagnetic change can explain, and the reasons say ‘during a gap’.`,
					'A node not heard for three of its periods is silent; after the site’s grace time its bay is not known, with what it last was.'
				]
			},
			{
				title: 'Neighbours',
				text: (say) => [
					`A vehicle is felt as far as the next bay. Steps at the same time within ${say('neighbourM')} are compared: one under ${say('echoRatio')} of the larger is its echo and moves no state. If it stays when the larger one leaves, it was a vehicle and is entered at its own time.`,
					`Weak steps that come together within ${say('queueS')} along a row are a queue in the aisle; what outlasts ${say('queueMaxS')} is parked.`
				]
			},
			{
				title: 'Doubt',
				text: (say) => [
					'A doubt means: do not rely on this bay, and why. It comes from a crossing without a step, a magnet, a flipped film, works that end, a reference that may hold a vehicle, or a stay that is too long.',
					`A stay past ${say('longStayH')}, or ${say('longStayFactor')} times the bay’s usual longest, is held against its arrival: the same size within ${say('longSizeRatio')} and direction within ${say('longAngleDeg')} is a long stay, anything else a doubt.`
				],
				example: 'doubtful'
			},
			{
				title: 'How sure',
				text: () => [
					'Sure, fairly sure and unsure come from how often states with the same reasons were right on sites whose truth is known. The figure stands in the dossier.'
				]
			}
		]
	},
	{
		title: 'What moves the quiet field',
		lead: 'The field of an empty bay moves by tens of milligauss without any vehicle. Only lost film is cured by a pulse, so each hour’s movement since the reference is taken apart by cause.',
		rules: [
			{
				title: 'Temperature',
				text: (say) => [
					`The slope is learned at the node itself, from triples of hours in which temperature bent by at least ${say('tripleDenominatorC')}; fewer than ${say('minTriples')} triples give none, never a guess.`
				]
			},
			{
				title: 'Geomagnetic weather',
				text: (say) => [
					`What at least ${say('lineNodes')} nodes saw alike, each along its own horizontal field, is the site’s line. Where they disagree by more than ${say('lineSpreadMg')}, or it is over ${say('lineLimitMg')}, nothing is taken out: ‘site-wide change, cause not known’.`
				]
			},
			{
				title: 'Bridge, surroundings, film',
				text: (say) => [
					'A pair tells them apart: the offset that moved is the bridge; the field that moved around a healed film is the surroundings; what the pulse gave back is film.',
					`Weaker in the same direction, within ${say('gainAngleDeg')}, is ‘gain or field’; turned at the same strength, within ${say('tiltMagnitudeMg')}, is ‘consistent with a tilt’; the rest is ‘steel or works’.`
				]
			},
			{
				title: 'Unexplained, and drifting',
				text: (say) => [
					`What remains is unexplained. A limit counts as passed only when the value less two standard errors passes it. ${say('driftingMg')} in ${say('driftingHours')} running is drifting: states are still good. A slow sum of daily medians (CUSUM) finds what never jumps.`,
					'Days to the limit are a range, from the limits of the rate; a movement that chance explains is no trend.'
				],
				example: 'drifting'
			},
			{
				title: 'When a film refresh is due',
				text: (say) => [
					`After an overload with no pulse since, with a flipped film, or with ${say('refreshMg')} unexplained for ${say('refreshHours')} and no pulse since it began. An offset or a gain that moved is no reason: no pulse cures it.`,
					`An offset that jumps by ${say('visitOffsetMg')} twice within ${say('visitOffsetDays')}, or a gain off by ${say('visitGain')} after a pulse, means a visit.`
				]
			}
		]
	},
	{
		title: 'Where it can be wrong',
		lead: 'Known weaknesses, so that nobody has to find them out.',
		rules: [
			{
				title: 'Detection',
				text: (say) => [
					'A vehicle whose field at the node equals the empty bay’s is not seen. A vehicle much smaller than one that comes next door at the same moment is taken for its echo until that one leaves.',
					`A provisional reference can be wrong until ${say('returnsToProve')} have proved it.`
				]
			},
			{
				title: 'Drift',
				text: () => [
					'Steel that happens to keep the field’s strength looks like a tilt, and steel against the field like gain: the words hedge. A node that is never alone in an empty bay tells nothing of its surroundings.'
				]
			},
			{
				title: 'What it is not for',
				text: () => [
					'This is not a safety device: never the only means that keeps a barrier, bollard or gate from moving. An occupancy record alone is not evidence of an offence.'
				]
			}
		]
	}
];
