import { useTranslation } from "react-i18next";

/** How to name the release, to read, to copy (one press marks all of it), and as a file for a bibliography. */
export function ReleaseCitation({ text, number, checksum }: { text: string; number: number; checksum: string }) {
	const { t } = useTranslation(["public", "dataroom"]);
	return (
		<>
			<p className="max-w-prose border-l-4 border-damson bg-damson-wash px-5 py-4 wrap-anywhere select-all">{text}</p>
			<ul className="no-print mt-3 flex flex-wrap items-center gap-x-6 gap-y-2">
				<li>
					<a href={`/data/${number}/citation.bib`} download>
						{t("dataroom:cite.bibtex")}
					</a>
				</li>
				<li>
					<a href={`/data/${number}/citation.ris`} download>
						{t("dataroom:cite.ris")}
					</a>
				</li>
			</ul>
			<p className="mt-3 max-w-prose text-sm text-quiet wrap-anywhere">{t("public:data.one.frozen", { checksum })}</p>
		</>
	);
}
