import type { ReactNode } from "react";
import { Outlet } from "react-router";
import type { Route } from "./+types/layout";
import { LanguageSwitch } from "#app/components/language-switch.tsx";
import { readError, RefusalPage } from "#app/components/refusal-page.tsx";
import { Sheet } from "#app/components/shell.tsx";
import { HelpLine } from "#app/components/site-footer.tsx";
import { Brand, SignedIn } from "#app/components/site-header.tsx";
import { RefusedPart } from "./parts/phone-part.tsx";

export default function GrowerLayout() {
	return (
		<GrowerFrame>
			<Outlet />
		</GrowerFrame>
	);
}

export function ErrorBoundary({ error }: Route.ErrorBoundaryProps) {
	return (
		<GrowerFrame>
			<RefusalPage error={error} />
			<RefusedPart code={readError(error).code} />
		</GrowerFrame>
	);
}

/** One column in large type with nothing but the question; language above, help below, on every page. */
function GrowerFrame({ children }: { children: ReactNode }) {
	const header = (
		<header className="double-rule no-print flex flex-wrap items-center justify-between gap-x-4 px-gutter py-1">
			<Brand />
			<div className="flex flex-wrap items-center">
				<LanguageSwitch />
				<SignedIn />
			</div>
		</header>
	);
	const footer = (
		<footer className="mt-auto border-t border-line px-gutter py-4 text-base print:hidden">
			<HelpLine />
		</footer>
	);
	return (
		<Sheet header={header} footer={footer} width="narrow">
			{children}
		</Sheet>
	);
}
