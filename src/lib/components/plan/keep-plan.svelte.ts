import { keepPlan, type Keeper, type KeptPlan } from '$lib/components/sheet/kept';
import { untrack } from 'svelte';

const EVERY_MS = 60_000;
const FIRST_MS = 2_000;

/**
 * Keeps the plan that is on the screen for opening without a connection: soon after it stands, once a
 * minute, and when the page is put away. Call in a component's script; null = nothing sure to keep.
 */
export function keepShownPlan(who: () => Keeper, plan: () => KeptPlan | null): void {
	$effect(() => {
		const keep = () => {
			const now = untrack(plan);
			if (now !== null) void keepPlan(untrack(who), now).catch(() => undefined);
		};
		const hidden = () => {
			if (document.visibilityState === 'hidden') keep();
		};
		const first = setTimeout(keep, FIRST_MS);
		const timer = setInterval(keep, EVERY_MS);
		document.addEventListener('visibilitychange', hidden);
		return () => {
			clearTimeout(first);
			clearInterval(timer);
			document.removeEventListener('visibilitychange', hidden);
		};
	});
}
