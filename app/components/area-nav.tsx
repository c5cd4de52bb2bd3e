import { NavLink } from "react-router";

type AreaNavProps = { label: string; items: { to: string; label: string; end?: boolean }[] };

/** The pages of one working area, under the site's own navigation. */
export function AreaNav({ label, items }: AreaNavProps) {
	return (
		<nav aria-label={label} className="border-b border-rule bg-sheet px-gutter">
			<ul className="-mx-2.5 flex flex-wrap">
				{items.map((item) => (
					<li key={item.to}>
						<NavLink
							to={item.to}
							end={item.end}
							className="inline-flex min-h-11 items-center border-b-3 border-transparent px-2.5 text-ink no-underline hover:border-rule aria-[current=page]:border-damson aria-[current=page]:font-bold aria-[current=page]:text-damson"
						>
							{item.label}
						</NavLink>
					</li>
				))}
			</ul>
		</nav>
	);
}
