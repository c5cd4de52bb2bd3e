import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import { Notice } from "#app/components/notice.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { fileKindOf } from "#app/publish/files/file-kinds.ts";

type File = { name: string; byteCount: number; sha256: string };

/** A release's files with what proves that one came whole. They are open to all, as what they hold is. */
export function ReleaseFiles({ number, files }: { number: number; files: File[] }) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	if (files.length === 0)
		return (
			<Notice tone="info" title={t("fileTable.soonTitle")}>
				{t("fileTable.soonBody")}
			</Notice>
		);
	return (
		<>
			<DataTable
				caption={t("fileTable.caption")}
				rows={files}
				rowKey={({ name }) => name}
				columns={[
					{
						key: "name",
						header: t("fileTable.name"),
						cell: ({ name }) => (
							<a href={`/api/v1/releases/${number}/files/${name}`} download>
								{name}
							</a>
						),
					},
					{ key: "about", header: t("fileTable.about"), cell: ({ name }) => t(`fileAbout.${fileKindOf(name)}`) },
					{
						key: "size",
						header: t("fileTable.size"),
						numeric: true,
						cell: ({ byteCount }) => <span className="whitespace-nowrap">{format.fileSize(byteCount)}</span>,
					},
					{
						key: "sum",
						header: t("fileTable.sum"),
						cell: ({ sha256 }) => <code className="block min-w-44 text-xs wrap-anywhere">{sha256}</code>,
					},
				]}
			/>
			<p className="mt-3 max-w-prose text-sm text-quiet">{t("fileTable.same")}</p>
		</>
	);
}
