import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { ButtonLink } from "#app/components/button.tsx";
import { CopyButton } from "#app/components/copy-button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { AreaKind } from "#app/publish/cell.ts";
import { fileKindOf } from "#app/publish/files/file-kinds.ts";
import { tableLimits } from "#app/publish/tables/limits.ts";
import type { ToldTable } from "#app/publish/tables/tell-table.ts";
import type { TablePage } from "./table-page.ts";

type DownloadsProps = Pick<TablePage, "search" | "site" | "addresses" | "approved"> & { table: ToldTable };

const outlined: Record<AreaKind, string> = {
	county: "counties.geojson",
	district: "districts.geojson",
	state: "states.geojson",
	region: "region.geojson",
};
const filesOf = ({ kinds }: ToldTable) => [
	"table.zip",
	"table.csv",
	"cells.csv",
	"cells.xlsx",
	"cells.parquet",
	...kinds.map((kind) => outlined[kind]),
	"cells.sdmx.csv",
	"sdmx-structure.json",
	"csv-metadata.json",
	"datapackage.json",
	"measures.csv",
	"crops.csv",
	"areas.csv",
	"releases.csv",
	"codebook.json",
	"codebook.csv",
	"SHA256SUMS",
];

/** The table's own address, its files, and where programs have the same cells. */
export function TableDownloads({ search, site, addresses, approved, table }: DownloadsProps) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	const permalink = `${site}${href("/dataroom/tables")}?${search}`;
	return (
		<>
			<Section title={t("tables.keep")}>
				<p className="mb-3 wrap-anywhere">
					<a href={permalink}>{permalink}</a>
				</p>
				<CopyButton key={permalink} text={permalink} label={t("tables.copy")} />
			</Section>
			<Section title={t("tables.take")}>
				<p className="mb-4 max-w-prose text-quiet">
					{t("tables.takeAbout", { cells: format.number(tableLimits.cells) })}
				</p>
				{approved ? <FileList search={search} files={filesOf(table)} /> : <NotApproved />}
			</Section>
			<Section title={t("tables.api")}>
				<p className="mb-3 max-w-prose">{t("tables.apiAbout")}</p>
				<ul className="mb-3 list-none space-y-1 text-sm wrap-anywhere">
					{addresses.map((address) => (
						<li key={address}>
							<a href={address}>{`${site}${address}`}</a>
						</li>
					))}
				</ul>
				<p className="flex flex-wrap items-center gap-4">
					<CopyButton
						key={search}
						text={addresses.map((address) => `${site}${address}`).join("\n")}
						label={t("tables.copyApi", { count: addresses.length })}
					/>
					<Link to={href("/dataroom/keys")}>{t("keys.title")}</Link>
				</p>
			</Section>
		</>
	);
}

function FileList({ search, files }: { search: string; files: string[] }) {
	const { t } = useTranslation("dataroom");
	return (
		<ul className="grid list-none gap-x-8 gap-y-1 sm:grid-cols-2">
			{files.map((file) => (
				<li key={file} className="py-1">
					<a href={`${href("/dataroom/tables/:file", { file })}?${search}`} download>
						{file}
					</a>
					<span className="block text-sm text-quiet">{t(`fileAbout.${fileKindOf(file)}`)}</span>
				</li>
			))}
		</ul>
	);
}

function NotApproved() {
	const { t } = useTranslation("dataroom");
	return (
		<Notice tone="info" title={t("tables.notApprovedTitle")}>
			<p className="mb-3">{t("tables.notApprovedBody")}</p>
			<ButtonLink to={href("/dataroom/access")}>{t("home.ask")}</ButtonLink>
		</Notice>
	);
}
