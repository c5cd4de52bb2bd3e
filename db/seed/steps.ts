/** Runs one step of the filling and prints what came of it and its time, in the words of the set-up's own steps. */
export async function report(title: string, work: () => Promise<string>): Promise<void> {
	const since = performance.now();
	const outcome = await work();
	console.log(`  ${title} ... ${outcome} (${((performance.now() - since) / 1000).toFixed(1)} s)`);
}
