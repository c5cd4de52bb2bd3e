import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Confirm } from "#app/components/confirm.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Section } from "#app/components/section.tsx";
import { countyName } from "#app/i18n/county-name.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { CountyNames } from "./county-names.tsx";

type DistrictTableProps = {
	counties: { countyFips: string; name: string; district: string | null }[];
	/** What stands in the boxes instead of today's names: what was typed, or what is proposed. */
	filled: Record<string, string> | undefined;
	/** Further names to choose from. */
	names?: string[];
	version: number;
	action: string;
	problems: Problem[] | undefined;
	/** Changes when the boxes are to be filled anew. */
	formKey: string;
	/** What else can be done with what is typed. */
	children?: ReactNode;
};

/** A state's counties with the name of each one's district in a box, to be saved. */
export function DistrictTable(props: DistrictTableProps) {
	const { counties, filled, version, action, problems, formKey, children } = props;
	const { t } = useTranslation("districts");
	const rows = counties.map(({ countyFips, name, district }) => ({
		countyFips,
		name,
		now: district,
		typed: filled ? (filled[countyFips] ?? "") : (district ?? ""),
	}));
	const names = new Set([...counties.map(({ district }) => district ?? ""), ...(props.names ?? [])]);
	return (
		<Section title={t("table.title")}>
			<p className="mb-4 max-w-prose">{t("table.lead")}</p>
			<ErrorSummary
				problems={problems}
				labels={Object.fromEntries(
					counties.map(({ countyFips, name }) => [
						`district.${countyFips}`,
						t("table.boxLabel", { county: countyName(t, { name, countyFips }) }),
					]),
				)}
			/>
			<Form key={formKey} method="post" action={action} noValidate>
				<input type="hidden" name="seen" value={version} />
				<CountyNames rows={rows} names={[...names].filter(Boolean).toSorted()} problems={problems} />
				<div className="mt-5 flex flex-wrap gap-3">
					{children}
					<Confirm
						trigger={t("save")}
						title={t("confirm.title")}
						body={t("confirm.body")}
						confirmLabel={t("save")}
						name="decision"
						value="save"
					/>
				</div>
			</Form>
		</Section>
	);
}
