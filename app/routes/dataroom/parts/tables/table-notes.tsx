import { useTranslation } from "react-i18next";
import { Notice } from "#app/components/notice.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { TableCatalogue } from "#app/publish/tables/catalogue.ts";
import type { Alike, TableNote } from "#app/publish/tables/comparability.ts";
import { useTableNames } from "./table-names.ts";

type NotesProps = { notes: TableNote[]; catalogue: TableCatalogue };

/** In what the releases of a table differ, each with the releases by name, before anybody compares them. */
export function TableNotes({ notes, catalogue }: NotesProps) {
	const { t } = useTranslation("dataroom");
	const words = useNoteWords(catalogue);
	if (notes.length === 0) return null;
	return (
		<Notice tone="attention" title={t("tables.notes")}>
			<ul className="list-disc pl-5">
				{notes.map((note) => (
					<li key={`${note.kind} ${note.of}`}>{words(note)}</li>
				))}
			</ul>
		</Notice>
	);
}

function useNoteWords(catalogue: TableCatalogue) {
	const { t, i18n } = useTranslation("dataroom");
	const format = useFormat();
	const { nameOf } = useTableNames(catalogue);
	const releaseName = (number: number) => {
		const release = catalogue.releases.find((one) => one.number === number)!;
		return t("tables.release", { number, season: release.season, title: wordsIn(release.title, i18n.language) });
	};
	const groupOf = ({ releases, value }: Alike, setting: string | undefined) => {
		const names = format.list(releases.map(releaseName));
		return value === undefined ? names : t("tables.valueIn", { value: settingValue(setting, value), releases: names });
	};
	const settingValue = (setting: string | undefined, value: number) =>
		setting?.endsWith("Cv") ? format.quantity(value * 100, "percent") : format.number(value);
	return ({ kind, of = "", groups }: TableNote): string => {
		const about =
			kind === "setting"
				? t("tables.note.setting", { setting: t(`tables.setting.${of}`) })
				: t(`tables.note.${kind}`, { measure: of === "" ? "" : nameOf("measure", of) });
		return t("tables.noteIn", { about, groups: groups.map((group) => groupOf(group, of)).join(" | ") });
	};
}
