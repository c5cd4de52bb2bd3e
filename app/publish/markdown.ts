import { fromMarkdown } from "mdast-util-from-markdown";
import { type Reference, takenApart } from "./report.ts";

type BlockNode = ReturnType<typeof fromMarkdown>["children"][number];
type InlineNode = Extract<BlockNode, { type: "paragraph" }>["children"][number];

/** Words of a text block; `Figure` is an address into the release, or what was found there. */
export type Inline<Figure> =
	| { kind: "text"; text: string }
	| { kind: "figure"; figure: Figure }
	| { kind: "strong" | "emphasis"; children: Inline<Figure>[] }
	| { kind: "link"; href: string; children: Inline<Figure>[] }
	| { kind: "break" };
export type Passage<Figure> =
	| { kind: "paragraph" | "subheading"; children: Inline<Figure>[] }
	| { kind: "list"; ordered: boolean; items: Passage<Figure>[][] }
	| { kind: "quote"; children: Passage<Figure>[] };

/** Stand-ins for references while Markdown is read, so that none of its signs can tear one apart. */
const [open, close] = ["\uE000", "\uE001"];
const standIn = new RegExp(`${open}(\\d+)${close}`, "g");

/**
 * A text block's Markdown as plain data: paragraphs, lists, quotations, emphasis and links. HTML in it stays text and a
 * picture leaves its alternative, so that nothing written here can become anything but words.
 */
export function parseMarkdown(text: string): Passage<Reference>[] {
	const { marked, references } = takenApart(text.replace(/[\uE000\uE001]/g, ""), (index) => `${open}${index}${close}`);
	return passagesOf(fromMarkdown(marked).children, references);
}

function passagesOf(nodes: BlockNode[], references: Reference[]): Passage<Reference>[] {
	return nodes.flatMap((node): Passage<Reference>[] => {
		switch (node.type) {
			case "paragraph":
				return [{ kind: "paragraph", children: inlinesOf(node.children, references) }];
			case "heading":
				return [{ kind: "subheading", children: inlinesOf(node.children, references) }];
			case "list": {
				const items = node.children.map((item) => passagesOf(item.children, references));
				return [{ kind: "list", ordered: node.ordered === true, items }];
			}
			case "blockquote":
				return [{ kind: "quote", children: passagesOf(node.children, references) }];
			case "code":
			case "html":
				return [{ kind: "paragraph", children: wordsOf(node.value, references) }];
			default:
				return [];
		}
	});
}

function inlinesOf(nodes: InlineNode[], references: Reference[]): Inline<Reference>[] {
	return nodes.flatMap((node): Inline<Reference>[] => {
		switch (node.type) {
			case "strong":
			case "emphasis":
				return [{ kind: node.type, children: inlinesOf(node.children, references) }];
			case "link": {
				const children = inlinesOf(node.children, references);
				return isSafe(node.url) ? [{ kind: "link", href: node.url, children }] : children;
			}
			case "break":
				return [{ kind: "break" }];
			case "image":
				return wordsOf(node.alt ?? "", references);
			default:
				if ("value" in node) return wordsOf(node.value, references);
				return "children" in node ? inlinesOf(node.children, references) : [];
		}
	});
}

/** Words with the references among them put back. */
function wordsOf(value: string, references: Reference[]): Inline<Reference>[] {
	const words: Inline<Reference>[] = [];
	let end = 0;
	const add = (text: string) => text && words.push({ kind: "text", text });
	for (const match of value.matchAll(standIn)) {
		add(value.slice(end, match.index));
		const reference = references[Number(match[1])];
		if (reference) words.push({ kind: "figure", figure: reference });
		end = match.index + match[0].length;
	}
	add(value.slice(end));
	return words;
}

/** Pages of the web and of this site, mail and telephone; no address that runs code, and none with a figure in it. */
function isSafe(url: string): boolean {
	return /^(https?:\/\/|mailto:|tel:|\/(?![/\\]))/i.test(url) && !/[\uE000\uE001]/.test(url);
}

/** The same passages with each figure looked up. */
export function withFigures<A, B>(passages: Passage<A>[], look: (figure: A) => B): Passage<B>[] {
	const inline = (node: Inline<A>): Inline<B> => {
		if (node.kind === "figure") return { kind: "figure", figure: look(node.figure) };
		return "children" in node ? { ...node, children: node.children.map(inline) } : node;
	};
	return passages.map((passage): Passage<B> => {
		if (passage.kind === "list") return { ...passage, items: passage.items.map((item) => withFigures(item, look)) };
		if (passage.kind === "quote") return { ...passage, children: withFigures(passage.children, look) };
		return { ...passage, children: passage.children.map(inline) };
	});
}
