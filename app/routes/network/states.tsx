import { useTranslation } from "react-i18next";
import { Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/states";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { listNetworkStates } from "#app/auth/network-states.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

/** `?open=`: the state whose districts are to be shown. */
const Query = z.object({
	open: z
		.string()
		.regex(/^\d{2}$/)
		.optional()
		.catch(undefined),
});

export async function loader({ context, request }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	const { open } = Query.parse(Object.fromEntries(new URL(request.url).searchParams));
	if (open) throw redirect(href("/network/states/:stateFips", { stateFips: open }));
	const states = await network.transaction((trx) => listNetworkStates(trx, network.viewer));
	return {
		served: states.filter(({ associates, districts }) => associates.length > 0 || districts > 0),
		others: states
			.filter(({ associates, districts }) => associates.length === 0 && districts === 0)
			.map(({ stateFips }) => stateFips),
	};
}

/** The states of the network: who serves each, and how its counties are grouped. */
export default function States({ loaderData: { served, others } }: Route.ComponentProps) {
	const { t } = useTranslation("network");
	const format = useFormat();
	return (
		<Page title={t("states.title")} lead={t("states.lead")}>
			<DataTable
				caption={t("states.title")}
				captionHidden
				rows={served}
				rowKey={({ stateFips }) => stateFips}
				columns={[
					{
						key: "state",
						header: t("people.state"),
						cell: ({ stateFips }) => (
							<Link to={href("/network/states/:stateFips", { stateFips })}>{t(`common:state.${stateFips}`)}</Link>
						),
					},
					{
						key: "associates",
						header: t("states.associates"),
						cell: ({ associates }) => (associates.length > 0 ? format.list(associates) : t("states.nobody")),
					},
					{ key: "counties", header: t("states.counties"), numeric: true, cell: (row) => format.number(row.counties) },
					{
						key: "districts",
						header: t("states.districts"),
						numeric: true,
						cell: (row) => format.number(row.districts),
					},
					{
						key: "redrawn",
						header: t("states.redrawn"),
						cell: ({ redrawnAt }) => (redrawnAt ? format.moment(redrawnAt) : t("states.never")),
					},
				]}
				empty={<p>{t("states.none")}</p>}
			/>
			<p className="mt-4 max-w-prose">
				{t("states.how")} <Link to={href("/network")}>{t("people.title")}</Link>
			</p>
			{others.length > 0 && (
				<Section title={t("states.other.title")}>
					<Form method="get" className="flex flex-wrap items-end gap-3 *:mb-0">
						<ChoiceField
							kind="select"
							name="open"
							legend={t("people.state")}
							options={others.map((fips) => ({ value: fips, label: t(`common:state.${fips}`) }))}
						/>
						<Button kind="secondary">{t("states.other.show")}</Button>
					</Form>
				</Section>
			)}
		</Page>
	);
}
