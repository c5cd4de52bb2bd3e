import { useTranslation } from "react-i18next";
import { Form, href, Link, redirect } from "react-router";
import type { Route } from "./+types/growers-export";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { Button } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { countPlantings } from "#app/directory/grower-file.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { listChosen, readChoice } from "./parts/growers/chosen.server.ts";

export async function loader({ context, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const { search } = new URL(request.url);
	const counted = await desk.transaction(async (trx) => {
		const { rows, operationIds, mark } = await listChosen(trx, desk.viewer, readChoice(request.url));
		return {
			mark,
			growers: rows.length,
			emails: rows.filter(({ email }) => email).length,
			phones: rows.filter(({ phone }) => phone).length,
			plantings: await countPlantings(trx, operationIds),
		};
	});
	if (counted.growers === 0) throw redirect(`${href("/desk/growers/chosen")}${search}`, 303);
	return { ...counted, search };
}

/** Says what a file of growers holds before it is made, since it leaves the product with personal data in it. */
export default function GrowersExport({ loaderData }: Route.ComponentProps) {
	const { mark, growers, emails, phones, plantings, search } = loaderData;
	const { t } = useTranslation("growers");
	const format = useFormat();
	const counted = { count: growers, value: format.number(growers) };
	return (
		<Page title={t("export.title", counted)}>
			<p className="no-print mb-4">
				<Link to={`${href("/desk/growers/chosen")}${search}`}>{t("export.back")}</Link>
			</p>
			<Section title={t("export.holds")}>
				<DescriptionList
					items={Object.entries({ growers, emails, phones, plantings }).map(([what, count]) => ({
						term: t(`export.${what}`),
						detail: format.number(count),
					}))}
				/>
			</Section>
			<Notice tone="caution" title={t("export.cautionTitle")}>
				{t("export.caution")}
			</Notice>
			{/* A file, which the browser fetches itself. */}
			<Form method="post" action={`${href("/desk/growers/list.csv")}${search}`} reloadDocument>
				<input type="hidden" name="mark" value={mark} />
				<Button>{t("export.take", counted)}</Button>
			</Form>
		</Page>
	);
}
