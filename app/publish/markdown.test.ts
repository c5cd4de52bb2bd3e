import { expect, test } from "vitest";
import { parseMarkdown, withFigures } from "./markdown.ts";

const reference = { measure: "crop_loss", crop: "apple", area: "network" };
const words = (text: string) => [{ kind: "text", text }];

test("emphasis, lists and links are read, and a figure in them stays whole", () => {
	const text = "Lost **[[crop_loss|apple|network]]** in _all_.\n\n- One\n- See [the map](/map)";
	expect(parseMarkdown(text)).toEqual([
		{
			kind: "paragraph",
			children: [
				...words("Lost "),
				{ kind: "strong", children: [{ kind: "figure", figure: reference }] },
				...words(" in "),
				{ kind: "emphasis", children: words("all") },
				...words("."),
			],
		},
		{
			kind: "list",
			ordered: false,
			items: [
				[{ kind: "paragraph", children: words("One") }],
				[
					{
						kind: "paragraph",
						children: [...words("See "), { kind: "link", href: "/map", children: words("the map") }],
					},
				],
			],
		},
	]);
});

test("underscores and brackets of a reference are no signs of Markdown", () => {
	const text = "_a [[_x|y|z]] [[crop_loss|tart_cherry|IA_3]]_";
	expect(JSON.stringify(parseMarkdown(text))).toContain('"crop":"tart_cherry","area":"IA_3"');
});

test("HTML stays text, a picture its alternative, and an address that runs code is no link", () => {
	const hostile = [
		"<script>alert(1)</script>",
		"an <b onclick=x>inline</b> tag",
		"![a tree](https://x.example/a.png)",
		"[press](javascript:alert(1)) [or](data:text/html,x) [or](//evil.example) [or](/\\evil.example)",
		"<javascript:alert(1)>",
	];
	const read = JSON.stringify(parseMarkdown(hostile.join("\n\n")));
	expect(read).not.toContain('"link"');
	expect(read).toContain("<script>alert(1)</script>");
	expect(read).toContain("a tree");
	expect(read).not.toContain("a.png");
});

test("signs that stand in for references cannot be smuggled in", () => {
	expect(parseMarkdown("\uE0000\uE001")).toEqual([{ kind: "paragraph", children: words("0") }]);
});

test("every figure of a text is looked up, also in quotations and lists", () => {
	const passages = parseMarkdown("> [[crop_loss|apple|network]]\n\n1. [[crop_loss|apple|network|last]]");
	const looked = withFigures(passages, (figure) => `${figure.area} ${figure.when ?? "now"}`);
	expect(JSON.stringify(looked)).toMatch(/"network now".*"network last"/);
});
