import { NavLink } from "react-router";

type TabsProps = { label: string; items: { to: string; label: string; end?: boolean }[] };

/** Sister pages side by side. Links, so that each has its address. */
export function Tabs({ label, items }: TabsProps) {
	return (
		<nav aria-label={label} className="mb-6 border-b border-line">
			<ul className="flex flex-wrap gap-x-1">
				{items.map((item) => (
					<li key={item.to}>
						<NavLink
							to={item.to}
							end={item.end}
							className="-mb-px inline-flex min-h-11 items-center border border-transparent px-4 text-ink no-underline hover:bg-sheet aria-[current=page]:border-line aria-[current=page]:border-b-paper aria-[current=page]:bg-paper aria-[current=page]:font-bold aria-[current=page]:text-damson"
						>
							{item.label}
						</NavLink>
					</li>
				))}
			</ul>
		</nav>
	);
}
