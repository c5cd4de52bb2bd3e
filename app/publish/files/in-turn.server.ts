import { setImmediate as nextRound } from "node:timers/promises";

/** So many may wait for their turn; who comes later is told to come again. */
const mostWaiting = 6;
let waiting = 0;
let last: Promise<unknown> = Promise.resolve();

/**
 * Does what takes a second of the processor one after another, so that several at once do not hold up the pages of all;
 * between two of them whoever waits for a page is answered.
 */
export async function inTurn<T>(work: () => Promise<T>): Promise<T | "busy"> {
	if (waiting >= mostWaiting) return "busy";
	waiting += 1;
	const turn = last.then(() => nextRound()).then(work);
	last = turn.catch(() => {});
	return turn.finally(() => {
		waiting -= 1;
	});
}
