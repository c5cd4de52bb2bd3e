// What is to be undone when the program ends, however it ends.
import { endRunning } from "./run.mjs";
import { tell } from "./steps.mjs";

const undoings = [];
let ending;

/** Registers what undoes a thing just done; the last done is the first undone. */
export function atEnd(undo) {
	undoings.push(undo);
}

export const isEnding = () => ending !== undefined;

/** Undoes everything once, says the last words and leaves with this code. Later calls wait for the first. */
export function end(code, lastWords = () => {}) {
	ending ??= (async () => {
		endRunning();
		for (const undo of undoings.toReversed()) await undo().catch(tell);
		lastWords();
		process.exit(code);
	})();
	return ending;
}

/** Ends in order on a signal, or when npm, which started this, is itself killed. */
export function endOnSignals(say = () => {}) {
	const codes = { SIGINT: 130, SIGTERM: 143, SIGHUP: 129 };
	for (const [signal, code] of Object.entries(codes)) {
		process.on(signal, () => {
			if (!isEnding()) say(signal); // npm passes on a Ctrl-C that arrives here anyway
			end(code);
		});
	}
	const starter = process.ppid;
	if (process.env.npm_lifecycle_event === undefined) return;
	setInterval(() => process.ppid !== starter && end(codes.SIGHUP), 1000).unref();
}
