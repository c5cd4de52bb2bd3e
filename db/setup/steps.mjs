// Each step of the set-up on a line of its own, with the time it took.

/** What whoever started the program can mend; shown as it stands, without a stack. */
export class Stop extends Error {}

export const seconds = (since) => `${((performance.now() - since) / 1000).toFixed(1)} s`;

/**
 * Runs one step and prints its title, what came of it and its time.
 * @param work may return a few words saying what came of it.
 * @param options.streams the step prints for itself, so its outcome goes on a line of its own.
 */
export async function step(title, work, { streams = false } = {}) {
	const since = performance.now();
	process.stdout.write(streams ? `\n--- ${title}\n` : `${title} ... `);
	try {
		const outcome = await work();
		const words = typeof outcome === "string" ? outcome : "done";
		process.stdout.write(`${streams ? `--- ${title}: ` : ""}${words} (${seconds(since)})\n`);
		return outcome;
	} catch (error) {
		process.stdout.write(`${streams ? `--- ${title}: ` : ""}failed (${seconds(since)})\n`);
		throw error;
	}
}

/** Tells what went wrong: a Stop in its own words, anything else whole, since it is a bug. */
export function tell(error) {
	console.error(error instanceof Stop ? `\n${error.message}` : error);
}
