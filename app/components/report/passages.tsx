import type { Inline } from "#app/publish/markdown.ts";
import type { ToldFigure, ToldPassage } from "./report-data.ts";
import { useFigureWords } from "./told-words.tsx";

/** A text block: paragraphs, lists and quotations, with each figure set off and kept in its sentence. */
export function Passages({ passages, tight = false }: { passages: ToldPassage[]; tight?: boolean }) {
	return passages.map((passage, index) => {
		// Passages have no name but their place, and are never reordered apart from their text.
		const key = `${passage.kind}-${index}`;
		switch (passage.kind) {
			case "paragraph":
				return (
					<p key={key} className={tight ? "max-w-prose" : "my-3 max-w-prose first:mt-0"}>
						<Inlines nodes={passage.children} />
					</p>
				);
			case "subheading":
				return (
					<h3 key={key} className="mb-2 mt-6 text-lg">
						<Inlines nodes={passage.children} />
					</h3>
				);
			case "quote":
				return (
					<blockquote key={key} className="my-4 border-l-4 border-rule pl-4">
						<Passages passages={passage.children} />
					</blockquote>
				);
			case "list":
				return <PassageList key={key} list={passage} />;
		}
	});
}

function PassageList({ list }: { list: Extract<ToldPassage, { kind: "list" }> }) {
	const List = list.ordered ? "ol" : "ul";
	return (
		<List className={`my-3 grid max-w-prose gap-1.5 pl-6 ${list.ordered ? "list-decimal" : "list-disc"}`}>
			{list.items.map((item, index) => (
				// oxlint-disable-next-line react/no-array-index-key -- an item has no name but its place
				<li key={index}>
					<Passages passages={item} tight />
				</li>
			))}
		</List>
	);
}

function Inlines({ nodes }: { nodes: Inline<ToldFigure>[] }) {
	const words = useFigureWords();
	return nodes.map((node, index) => {
		const key = `${node.kind}-${index}`;
		switch (node.kind) {
			case "text":
				return node.text;
			case "figure":
				return <strong key={key}>{words(node.figure)}</strong>;
			case "break":
				return <br key={key} />;
			case "strong":
				return (
					<strong key={key}>
						<Inlines nodes={node.children} />
					</strong>
				);
			case "emphasis":
				return (
					<em key={key}>
						<Inlines nodes={node.children} />
					</em>
				);
			case "link":
				return (
					<a key={key} href={node.href}>
						<Inlines nodes={node.children} />
					</a>
				);
		}
	});
}
