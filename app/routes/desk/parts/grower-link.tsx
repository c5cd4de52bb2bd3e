import type { ReactNode } from "react";
import { href, Link, useRouteLoaderData } from "react-router";
import type { loader } from "../survey-layout.tsx";

type GrowerLinkProps = {
	operationId: string;
	className?: string;
	children: ReactNode;
	/** Where the words only name the way, nothing stands in a rehearsal. */
	onlyAsLink?: boolean;
};

/** The way from a survey's pages to a grower's. The invented growers of a rehearsal have no page. */
export function GrowerLink({ operationId, className, children, onlyAsLink = false }: GrowerLinkProps) {
	const survey = useRouteLoaderData<typeof loader>("routes/desk/survey-layout");
	if (survey?.isRehearsal) return onlyAsLink ? null : children;
	return (
		<Link to={href("/desk/growers/:operationId", { operationId })} className={className}>
			{children}
		</Link>
	);
}
