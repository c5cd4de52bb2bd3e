import type { ReactNode } from "react";

type DescriptionListProps = { items: { term: string; detail: ReactNode }[] };

/** Facts about one thing, name beside value. */
export function DescriptionList({ items }: DescriptionListProps) {
	return (
		<dl className="border-t border-rule">
			{items.map(({ term, detail }) => (
				<div key={term} className="grid gap-x-6 border-b border-rule py-2.5 sm:grid-cols-[minmax(9rem,14rem)_1fr]">
					<dt className="font-bold">{term}</dt>
					<dd className="min-w-0 wrap-anywhere">{detail}</dd>
				</div>
			))}
		</dl>
	);
}
