import { Worker } from "node:worker_threads";
import type { BlockChoice } from "./choice.ts";
import type { Protection, ProtectOptions, ProtectProgress } from "./protect.ts";
import type { ProtectionRules } from "./rules.ts";
import type { ProtectionTable } from "./table.ts";
import type { ThreadAnswer, ThreadOrder, ThreadStart } from "./thread-messages.ts";

export interface ThreadOptions {
	onProgress?: (progress: ProtectProgress) => void;
	/** Ends the computation, and its threads with it. */
	signal?: AbortSignal;
	/** At most so many threads; a table of one block takes one. */
	threads?: number;
}

const MOST_THREADS = 2;

/** A thread does not inherit the reading of TypeScript from the process that starts it, be it tsx or vitest. */
const fromSources = () => `
	import(${JSON.stringify(import.meta.resolve("tsx/esm/api"))})
		.then(({ register }) => register())
		.then(() => import(${JSON.stringify(new URL("./protect-worker.server.ts", import.meta.url))}));`;
/** The build puts the thread's program beside the one that starts it. */
const fromBuild = () => `import(${JSON.stringify(new URL("./protect-worker.js", import.meta.url))});`;
const beginning = import.meta.url.endsWith(".ts") ? fromSources() : fromBuild();

/**
 * `protect` in threads of its own, so that the caller's stays free for requests and other jobs. Blocks go to whichever
 * thread is free; as no block depends on another, the result is the same as in one thread.
 * @throws {RangeError} as `protect` does.
 * @throws the signal's reason when it is aborted; {Error} when a thread ends by itself.
 */
export async function protectInThread(
	table: ProtectionTable,
	rules: ProtectionRules,
	options: ProtectOptions = {},
	{ onProgress = () => {}, signal, threads = MOST_THREADS }: ThreadOptions = {},
): Promise<Protection> {
	signal?.throwIfAborted();
	const crew = new Crew({ table, rules, options }, onProgress, threads);
	const abort = () => crew.fail(signal!.reason);
	signal?.addEventListener("abort", abort);
	try {
		return await crew.result;
	} finally {
		signal?.removeEventListener("abort", abort);
		await crew.dismiss();
	}
}

class Crew {
	readonly result: Promise<Protection>;
	fail!: (reason: unknown) => void;
	#succeed!: (protection: Protection) => void;
	readonly #workers: Worker[] = [];
	readonly #choices = new Map<number, BlockChoice | null>();
	/** by block under way: the best loss and the bound so far */
	readonly #searching = new Map<number, { best: number; bound: number }>();
	#blocks = 0;
	#next = 0;

	constructor(
		readonly start: ThreadStart,
		readonly onProgress: (progress: ProtectProgress) => void,
		readonly threads: number,
	) {
		this.result = new Promise((resolve, reject) => {
			this.#succeed = resolve;
			this.fail = reject;
		});
		this.#hire();
	}

	/** Ends every thread, also in the middle of a solve. */
	async dismiss() {
		await Promise.all(this.#workers.map((worker) => worker.terminate()));
	}

	#hire() {
		const worker = new Worker(beginning, { eval: true, workerData: this.start, execArgv: [] });
		this.#workers.push(worker);
		worker.on("message", (answer: ThreadAnswer) => this.#hear(worker, answer));
		worker.on("error", this.fail);
		worker.on("exit", (code) => this.fail(new Error(`a thread that chose shields ended with ${code}`)));
	}

	#hear(worker: Worker, answer: ThreadAnswer) {
		switch (answer.kind) {
			case "ready":
				this.#blocks = answer.blocks;
				while (this.#workers.length < Math.min(this.threads, answer.blocks)) this.#hire();
				this.#give(worker);
				break;
			case "searching":
				this.#searching.set(answer.block, answer);
				this.#tell("choosing");
				break;
			case "chosen":
				this.#choices.set(answer.block, answer.choice);
				this.#searching.delete(answer.block);
				this.#tell("choosing");
				this.#give(worker);
				break;
			case "phase":
				this.#tell(answer.phase);
				break;
			case "concluded":
				this.#succeed(answer.protection);
				break;
			case "refused":
				this.fail(new RangeError(answer.message));
				break;
		}
	}

	/** The next block; when all are chosen, this thread concludes. */
	#give(worker: Worker) {
		const order = (message: ThreadOrder) => worker.postMessage(message, []);
		if (this.#next < this.#blocks) order({ kind: "block", block: this.#next++ });
		else if (this.#choices.size === this.#blocks) {
			const choices = Array.from({ length: this.#blocks }, (_, block) => this.#choices.get(block)!);
			order({ kind: "conclude", choices });
		}
	}

	#tell(phase: ProtectProgress["phase"]) {
		const done = this.#choices.size;
		let [lost, bound] = [0, 0];
		for (const choice of this.#choices.values()) {
			lost += choice?.loss ?? 0;
			bound += choice?.bound ?? 0;
		}
		for (const { best, bound: least } of this.#searching.values()) {
			lost += Number.isFinite(best) ? best : least;
			bound += least;
		}
		this.onProgress({ phase, done, total: this.#blocks, lost, bound });
	}
}
