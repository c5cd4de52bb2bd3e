import type { ReactNode } from "react";

type EmptyStateProps = { title: string; children?: ReactNode; action?: ReactNode };

/** A place where nothing is yet, with what to do next: a page of the ledger still to be written. */
export function EmptyState({ title, children, action }: EmptyStateProps) {
	return (
		<div className="border border-rule">
			<div aria-hidden="true" className="ledger h-16 border-b border-rule" />
			<div className="px-5 py-6">
				<p className="text-lg font-bold">{title}</p>
				{children && <div className="mt-1 max-w-prose text-quiet">{children}</div>}
				{action && <div className="mt-5 flex flex-wrap gap-3">{action}</div>}
			</div>
		</div>
	);
}
