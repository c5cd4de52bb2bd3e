import type { BlockChoice } from "./choice.ts";
import type { Protection, ProtectOptions, ProtectProgress } from "./protect.ts";
import type { ProtectionRules } from "./rules.ts";
import type { ProtectionTable } from "./table.ts";

/** What a thread is given when it starts. */
export interface ThreadStart {
	table: ProtectionTable;
	rules: ProtectionRules;
	options: ProtectOptions;
}

/** What a thread is asked: one block after the other, then, of one thread, the conclusion. */
export type ThreadOrder =
	{ kind: "block"; block: number } | { kind: "conclude"; choices: readonly (BlockChoice | null)[] };

export type ThreadAnswer =
	| { kind: "ready"; blocks: number }
	| { kind: "searching"; block: number; best: number; bound: number }
	| { kind: "chosen"; block: number; choice: BlockChoice | null }
	| { kind: "phase"; phase: ProtectProgress["phase"] }
	| { kind: "concluded"; protection: Protection }
	/** A fault in what was given, to be thrown by the caller as it was here. */
	| { kind: "refused"; message: string };
