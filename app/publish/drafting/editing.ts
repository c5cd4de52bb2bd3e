import { z } from "zod";
import {
	type Block,
	type BlockType,
	blockTypes,
	DraftWords,
	eras,
	type Reference,
	referenceText,
	ReportContent,
} from "../report.ts";

/**
 * What a button of the editor asks for: `save` (`autosave` when nobody pressed one), `submit`, `add`; with a block's id, as in `up:b3`; or `overwrite:7`, to
 * save over what somebody else saved as the seventh edit.
 */
const Intent = z
	.string()
	.default("save")
	.transform((text, context) => {
		const [verb = "", blockId = ""] = text.split(":");
		const known = ["save", "autosave", "submit", "add", "up", "down", "remove", "insert", "overwrite"] as const;
		const found = known.find((name) => name === verb);
		if (found) return { verb: found, blockId };
		context.addIssue({ code: "custom", message: "wrong" });
		return z.NEVER;
	});

export const EditorForm = ReportContent.extend({
	edit: z.coerce.number().int().min(1),
	intent: Intent,
	/** What a correction changed and why; a first version has no such field. */
	correction: DraftWords.optional(),
	add: z.enum(blockTypes).optional(),
	pick: z
		.object({ measure: z.string(), crop: z.string(), area: z.string(), when: z.enum(eras).optional().catch(undefined) })
		.optional(),
});
export type EditorForm = z.infer<typeof EditorForm>;

/** The content after the button's act. `at` is the block to go to next. */
export function applyEdit(form: EditorForm, firstOf: Reference): { content: ReportContent; at: string | null } {
	const { title, summary, blocks, intent } = form;
	const index = blocks.findIndex(({ id }) => id === intent.blockId);
	const withBlocks = (next: Block[], at: string | null) => ({ content: { title, summary, blocks: next }, at });
	if (intent.verb === "add" && form.add) {
		const block = newBlock(form.add, freeId(blocks), firstOf);
		return withBlocks([...blocks, block], block.id);
	}
	if (index < 0) return withBlocks(blocks, null);
	if (intent.verb === "up" || intent.verb === "down") {
		return withBlocks(moved(blocks, index, intent.verb === "up" ? index - 1 : index + 1), intent.blockId);
	}
	if (intent.verb === "remove") {
		const next = blocks.filter(({ id }) => id !== intent.blockId);
		return withBlocks(next, next[Math.min(index, next.length - 1)]?.id ?? null);
	}
	if (intent.verb === "insert" && form.pick) {
		const text = referenceText(form.pick);
		return withBlocks(
			blocks.map((block) => (block.id === intent.blockId ? withText(block, text) : block)),
			intent.blockId,
		);
	}
	return withBlocks(blocks, intent.blockId);
}

function moved(blocks: Block[], from: number, to: number): Block[] {
	const block = blocks[from];
	if (!block || to < 0 || to >= blocks.length) return blocks;
	return blocks.toSpliced(from, 1).toSpliced(to, 0, block);
}

/** A reference goes to the end of both languages, where the associate moves it to its place. */
function withText(block: Block, reference: string): Block {
	if (!("text" in block)) return block;
	const joined = (text: string) => (text.trim() ? `${text.trimEnd()} ${reference}` : reference);
	return { ...block, text: { en: joined(block.text.en), es: joined(block.text.es) } };
}

function freeId(blocks: Block[]): string {
	const taken = new Set(blocks.map(({ id }) => id));
	let number = blocks.length + 1;
	while (taken.has(`b${number}`)) number += 1;
	return `b${number}`;
}

/** A new block points to the release's first figure, so that it is whole from the start. */
function newBlock(type: BlockType, id: string, { measure, crop, area }: Reference): Block {
	switch (type) {
		case "heading":
		case "text":
			return { id, type, text: { en: "", es: "" } };
		case "figure":
			return { id, type, measure, crop, area };
		case "map":
			return { id, type, measure, crop };
		case "table":
			return { id, type, measure, crop, kind: "district" };
		case "crops":
			return { id, type, measure, area };
		case "chart":
			return { id, type, chart: "crops", measure, crop, area, kind: "district" };
		case "caution":
			return { id, type, key: "local_advice" };
		case "photo":
			return { id, type, photo: "", alt: { en: "", es: "" } };
	}
}
