/** The newest change of a step: how many there were, and the name that its sender gave it, if any. */
export type StepChange = { version: number; changeId: string | null };

/** What a sender says about a change of a step. */
export type SentChange = {
	/** The version of the step that the sender had before its eyes. */
	seen: number;
	changeId: string | null;
	/** Names of the sender's earlier changes of the step of which it does not know whether they arrived. */
	unsure: string[];
};

/** As many names as a sender may tell. One left out could at worst be taken for another device's change. */
export const mostUnsure = 90;

/**
 * What a sender is unsure of after a change that was not kept as a whole: parts of it may have been sent beforehand, and may
 * still arrive.
 */
export function unsureNow(sent: SentChange | undefined): string[] {
	if (!sent) return [];
	return [...sent.unsure, ...(sent.changeId === null ? [] : [sent.changeId])].slice(-mostUnsure);
}

/** The newest change of each step that was ever kept, by the step's key. */
export type StepChanges = Record<string, StepChange>;

export function changeOf(changes: StepChanges, stepKey: string): StepChange | undefined {
	return Object.hasOwn(changes, stepKey) ? changes[stepKey] : undefined;
}

/** The version of a step to type upon; 0 where it was never kept. */
export function versionOf(changes: StepChanges, stepKey: string): number {
	return changeOf(changes, stepKey)?.version ?? 0;
}

/**
 * Whether a change may be written. "known" needs no writing: it was written before, or the step holds just that already.
 * What was typed upon an older version, while somebody else changed the step, is not written over theirs.
 * @param same whether the step already holds what was sent.
 */
export function judgeChange(
	newest: StepChange | undefined,
	sent: SentChange,
	same: boolean,
): "write" | "known" | "changed_elsewhere" {
	const { version, changeId } = newest ?? { version: 0, changeId: null };
	if (changeId !== null && changeId === sent.changeId) return "known";
	if (sent.seen === version) return "write";
	if (changeId !== null && sent.unsure.includes(changeId)) return "write";
	return same ? "known" : "changed_elsewhere";
}

/**
 * What the newest change is after one was written. One that changed nothing still counts where an earlier one of the same
 * sender may be on its way: that one, arriving late, must not be taken for newer.
 */
export function afterWriting(newest: StepChange | undefined, sent: SentChange, changed: boolean): StepChange {
	const before = newest ?? { version: 0, changeId: null };
	if (!changed && sent.unsure.length === 0) return { ...before, changeId: sent.changeId };
	return { version: before.version + 1, changeId: sent.changeId };
}
