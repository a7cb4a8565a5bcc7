import type { Facts } from '../../simulator/truth';

/** What a scenario must reach; each figure is set just under what is achieved and tightened as it improves. */
export interface Target {
	scenario: string;
	/** Days of the short run; the long run (LODEKEEP_ACCURACY=long) takes the scenario's own. */
	shortDays: number;
	/** Least F1 of events (method 9). */
	f1: number;
	/** Least share of time in the right state, not known counting as wrong. */
	right: number;
	/** Fewest events judged in a day: fewer means that the data thinned out. */
	eventsPerDay: number;
	/** What must have happened, or the run proves nothing (method 11). */
	holds: (facts: Facts) => Record<string, boolean>;
}

const nothing = (): Record<string, boolean> => ({});

/** The two that every test run judges (issue 5: 0.999 and 0.985); last seen 1.0000 and 0.9916, right 99.95 and 98.18 % on seed 7. */
export const SHORT_TARGETS: readonly Target[] = [
	{
		scenario: 'easy',
		shortDays: 3,
		f1: 0.999,
		right: 0.999,
		eventsPerDay: 350,
		holds: (facts) => ({ 'over 400 stays': facts.stays > 400 })
	},
	{
		scenario: 'hard',
		shortDays: 4,
		f1: 0.99,
		right: 0.98,
		eventsPerDay: 250,
		holds: (facts) => ({
			'a vehicle under 60 mG': facts.leastVehicleMg < 60,
			'a vehicle over 700 mG': facts.mostVehicleMg > 700,
			'a stay under 2 min': facts.shortestStayS < 120,
			'a stay over 40 h': facts.longestStayS > 40 * 3600,
			'a gap under a minute': facts.shortestGapS < 60,
			'an echo over 50 mG': facts.mostEchoMg > 50,
			'passes over 20 mG': facts.passesOver20Mg > 100,
			'queues over 20 mG': facts.queueLevelsOver20Mg > 20,
			'a storm of 15 mG': facts.stormPeakMg > 15,
			'steps of 5 mG a minute': facts.stormStepMg > 5,
			'a day over 35 °C': facts.warmestC > 35,
			'noise over 1.3 mG': facts.noisiestMg > 1.3,
			'film lost': facts.losses > 0,
			'pulses by rule': facts.pairs > 20,
			reboots: facts.reboots > 3,
			'messages lost': facts.lost > 1000,
			duplicates: facts.duplicated > 500,
			'out of order': facts.reordered > 500,
			'a day late': facts.late > 50,
			backlogs: facts.backlog > 100
		})
	}
];

const line = (scenario: string, holds: Target['holds'], f1 = 0.995, right = 0.995): Target => ({
	scenario,
	shortDays: 0,
	f1,
	right,
	eventsPerDay: 250,
	holds
});

/** Each line of method 11 by itself: the long run only. */
export const LINE_TARGETS: readonly Target[] = [
	line('noise', (facts) => ({ 'noise over 1.3 mG': facts.noisiestMg > 1.3 })),
	line('frost', (facts) => ({ 'under -15 °C': facts.coldestC < -15 })),
	line('heat', (facts) => ({ 'over 55 °C': facts.warmestC > 55 })),
	line('storms', (facts) => ({
		'20 mG': facts.stormPeakMg > 18,
		'steps of 6 mG': facts.stormStepMg > 6
	})),
	line('sizes', (facts) => ({
		'under 45 mG': facts.leastVehicleMg < 45,
		'over 900 mG': facts.mostVehicleMg > 900
	})),
	line('echo', (facts) => ({
		'over 70 mG': facts.mostEchoMg > 70,
		'many over 30 mG': facts.echoesOver30Mg > 100
	})),
	line('traffic', (facts) => ({
		'over 50 mG': facts.mostPassMg > 50,
		'many over 20 mG': facts.passesOver20Mg > 1000
	})),
	line('queues', (facts) => ({ 'standing over 20 mG': facts.queueLevelsOver20Mg > 100 })),
	line('spans', (facts) => ({
		'a minute': facts.shortestStayS < 70,
		'four days': facts.longestStayS > 96 * 3600
	})),
	line('offset', (facts) => ({ steps: facts.offsetSteps > 10, creeps: facts.offsetCreeps > 5 })),
	line('film-loss', (facts) => ({ losses: facts.losses > 10 })),
	line('flips', (facts) => ({ flips: facts.flips > 10 })),
	line('magnets', (facts) => ({ magnets: facts.magnets > 8 })),
	line('pulses', (facts) => ({ pairs: facts.pairs > 100, resets: facts.resets > 10 })),
	line('radio', (facts) => ({
		'20 % lost': facts.lost > 0.19 * facts.sent,
		'late by a day': facts.late > 100
	})),
	line('reboots', (facts) => ({ reboots: facts.reboots > 50, backlogs: facts.backlog > 1000 })),
	line('clocks', (facts) => ({ off: facts.clocksOff > 5, absent: facts.clocksAbsent > 3 })),
	line('heartbeats', nothing, 0.995, 0.99),
	line('two-bays', (facts) => ({ 'over 60 mG next door': facts.mostEchoMg > 60 })),
	line('silence', (facts) => ({ 'much not heard': facts.lost > 5000 }), 0.99, 0.92),
	line('by-rule', (facts) => ({ 'under a vehicle': facts.learnedUnderVehicle > 2 }))
];
