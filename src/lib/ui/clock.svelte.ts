/** One clock for everything that shows a running time, ticking on the second. */
let nowMs = $state(Date.now());
let users = 0;
let timer: ReturnType<typeof setTimeout> | undefined;

function tick(): void {
	nowMs = Date.now();
	timer = setTimeout(tick, 1000 - (nowMs % 1000));
}

export const clock = {
	get nowMs(): number {
		return nowMs;
	}
};

/** Call in $effect: the clock runs while somebody looks at it. */
export function runClock(): () => void {
	users += 1;
	if (users === 1) tick();
	return () => {
		users -= 1;
		if (users === 0) clearTimeout(timer);
	};
}
