import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Outlet, useRouteLoaderData } from "react-router";
import type { Route } from "./+types/layout";
import { deskGuard, requireAssociate } from "#app/auth/guard.server.ts";
import { listBarSurveys } from "#app/collect/season-bar.server.ts";
import { AreaNav } from "#app/components/area-nav.tsx";
import { RefusalPage } from "#app/components/refusal-page.tsx";
import { SeasonBar } from "#app/components/season-bar.tsx";
import { Shell } from "#app/components/shell.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";

export const middleware: Route.MiddlewareFunction[] = [deskGuard];

export async function loader({ context }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const language = getLanguage(context);
	const surveys = await desk.transaction((trx) => listBarSurveys(trx, desk.viewer));
	return {
		stateFips: desk.viewer.stateFips,
		surveys: surveys.map(({ surveyId, season, title, state, isRehearsal }) => ({
			surveyId,
			season,
			title: wordsIn(title, language),
			state,
			isRehearsal,
		})),
	};
}

export default function DeskLayout() {
	return (
		<DeskFrame>
			<Outlet />
		</DeskFrame>
	);
}

export function ErrorBoundary({ error }: Route.ErrorBoundaryProps) {
	return (
		<DeskFrame>
			<RefusalPage error={error} />
		</DeskFrame>
	);
}

function DeskFrame({ children }: { children: ReactNode }) {
	const { t } = useTranslation();
	// Missing where the layout's own loader failed.
	const desk = useRouteLoaderData<typeof loader>("routes/desk/layout");
	const below = desk && (
		<>
			<SeasonBar surveys={desk.surveys} stateFips={desk.stateFips} />
			<AreaNav
				label={t("nav.deskLabel")}
				items={[
					{ to: "/desk", label: t("nav.today"), end: true },
					{ to: "/desk/growers", label: t("nav.growers") },
					{ to: "/desk/surveys", label: t("nav.surveys") },
					{ to: "/desk/forms", label: t("nav.forms") },
					{ to: "/desk/reports", label: t("nav.reports") },
					{ to: "/desk/districts", label: t("nav.districts") },
				]}
			/>
		</>
	);
	return <Shell below={below}>{children}</Shell>;
}
