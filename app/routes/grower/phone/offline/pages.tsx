import { type ReactNode, useEffect, useSyncExternalStore } from "react";
import { useTranslation } from "react-i18next";
import { Link, Outlet, redirectDocument, type RouteObject, useActionData, useLoaderData } from "react-router";
import { Mark } from "#app/components/mark.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Sheet } from "#app/components/shell.tsx";
import { HelpLine } from "#app/components/site-footer.tsx";
import { ReviewView } from "../../parts/review-view.tsx";
import { ScreenView } from "../../parts/screen-view.tsx";
import { listenForHiding } from "../ask-leaving.ts";
import { startAskPage } from "../ask-page.ts";
import { readPage } from "../page-data.ts";
import { startPhotoPage } from "../photos/photo-page.ts";
import { here, onReachable } from "./here.ts";
import * as loaders from "./loaders.ts";

export const routes: RouteObject[] = [
	{
		Component: Frame,
		children: [
			{
				path: "/answer/:surveyId/:operationId",
				children: [
					{ index: true, loader: loaders.loadStart },
					{ path: "ask/:screen", loader: loaders.loadScreen, action: loaders.goOnFromScreen, Component: Screen },
					{ path: "review", loader: loaders.loadReview, action: loaders.sendInLater, Component: Review },
					{ path: "receipt", loader: loaders.loadReceipt, Component: Waiting },
				],
			},
			{ path: "*", loader: ({ request }) => redirectDocument(request.url) },
		],
	},
];

function Frame() {
	const { t } = useTranslation("grower");
	const isBack = useSyncExternalStore(onReachable, () => here.reachable);
	const header: ReactNode = (
		<header className="double-rule no-print flex items-center gap-2 px-gutter py-1">
			<Mark className="size-9" />
			<span className="text-xl font-bold tracking-tight">{t("common:app.name")}</span>
		</header>
	);
	const footer = (
		<footer className="mt-auto border-t border-line px-gutter py-4 text-base print:hidden">
			<HelpLine />
		</footer>
	);
	return (
		<Sheet header={header} footer={footer} width="narrow">
			<output className="block">{!isBack && <Notice tone="attention">{t("offline.notice")}</Notice>}</output>
			<Outlet />
		</Sheet>
	);
}

type Data<T extends (...args: never[]) => unknown> = Awaited<ReturnType<T>>;

function Screen() {
	const { shown, place, phone } = useLoaderData<Data<typeof loaders.loadScreen>>();
	const posted = useActionData<Parameters<typeof ScreenView>[0]["posted"]>();
	const { key } = shown.step;
	useEffect(() => keepScreen(key), [key]);
	return <ScreenView shown={shown} posted={posted} place={place} phone={phone} />;
}

/** Keeps the screen as it is typed, by the same script as the server's page, until another is drawn. */
function keepScreen(stepKey: string): () => void {
	const ending = new AbortController();
	const page = readPage();
	const form = document.querySelector<HTMLFormElement>("form[data-answering]");
	if (page?.stepKey === stepKey && page.responseId !== null && page.told !== null && form) {
		const { responseId, told } = page;
		void startAskPage(here.store, { ...page, stepKey, responseId, told }, form, ending.signal).then((ask) => {
			if (ending.signal.aborted) return;
			here.ask = ask;
			listenForHiding(ask, () => false);
			if (form.querySelector("input[type=file]")) void startPhotoPage(ask);
		});
	}
	return () => {
		ending.abort();
		here.ask = undefined;
	};
}

function Review() {
	const shown = useLoaderData<Data<typeof loaders.loadReview>>();
	return <ReviewView {...shown} refused={useActionData<Parameters<typeof ReviewView>[0]["refused"]>()} />;
}

/** In place of the receipt, which only the server can give. */
function Waiting() {
	const { t } = useTranslation("grower");
	const { review } = useLoaderData<Data<typeof loaders.loadReceipt>>();
	return (
		<Page title={t("offline.waitingTitle")} lead={t("offline.waitingLead")}>
			<p>{t("offline.waitingNext")}</p>
			<p className="mt-4">
				<Link to={review} className="inline-flex min-h-11 items-center">
					{t("start.review")}
				</Link>
			</p>
		</Page>
	);
}
