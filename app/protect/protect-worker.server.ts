// A thread of its own, started by protect-thread.server.ts: plans, then does one order after the other.
import { constants, setPriority } from "node:os";
import { parentPort, workerData } from "node:worker_threads";
import { chooseBlock } from "./choice.ts";
import { concludeProtection, planProtection } from "./protect.ts";
import { loadSolver } from "./solver.ts";
import type { ThreadAnswer, ThreadOrder, ThreadStart } from "./thread-messages.ts";

// Of this thread alone where the system counts by thread: pages on the same machine go first.
setPriority(constants.priority.PRIORITY_LOW);

const port = parentPort!;
const tell = (answer: ThreadAnswer) => port.postMessage(answer);
const { table, rules, options } = workerData as ThreadStart;
const solver = await loadSolver();

try {
	const plan = planProtection(solver, table, rules, options);
	port.on("message", (order: ThreadOrder) => {
		if (order.kind === "block") {
			const { block } = order;
			const watch = (best: number, bound: number) => tell({ kind: "searching", block, best, bound });
			tell({ kind: "chosen", block, choice: chooseBlock(solver, plan, plan.blocks[block]!, watch) });
			return;
		}
		const protection = concludeProtection(solver, plan, order.choices, (phase) => tell({ kind: "phase", phase }));
		tell({ kind: "concluded", protection });
	});
	tell({ kind: "ready", blocks: plan.blocks.length });
} catch (error) {
	if (!(error instanceof RangeError)) throw error;
	tell({ kind: "refused", message: error.message });
}
