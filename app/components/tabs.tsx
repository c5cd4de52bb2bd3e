import { Link, matchPath, NavLink, useLocation } from "react-router";

/** `also`: the address of pages that belong to the tab but lie beside it. */
type Tab = { to: string; label: string; end?: boolean; also?: string };
type TabsProps = { label: string; items: Tab[] };

const look =
	"-mb-px inline-flex min-h-11 items-center border border-transparent px-4 text-ink no-underline hover:bg-sheet aria-[current=page]:border-line aria-[current=page]:border-b-paper aria-[current=page]:bg-paper aria-[current=page]:font-bold aria-[current=page]:text-damson";

/** Sister pages side by side. Links, so that each has its address. */
export function Tabs({ label, items }: TabsProps) {
	const { pathname } = useLocation();
	return (
		<nav aria-label={label} className="mb-6 border-b border-line">
			<ul className="flex flex-wrap gap-x-1">
				{items.map((item) => (
					<li key={item.to}>
						{item.also && matchPath({ path: item.also, end: false }, pathname) ? (
							<Link to={item.to} aria-current="page" className={look}>
								{item.label}
							</Link>
						) : (
							<NavLink to={item.to} end={item.end} className={look}>
								{item.label}
							</NavLink>
						)}
					</li>
				))}
			</ul>
		</nav>
	);
}
