import { useTranslation } from "react-i18next";
import type { Question } from "#app/collect/form.ts";
import { mostPhotoBytes, mostPhotos } from "#app/collect/photo.ts";
import { Button, buttonClasses } from "#app/components/button.tsx";
import { classes } from "#app/components/classes.ts";
import { Confirm } from "#app/components/confirm.tsx";
import { fileButton } from "#app/components/file-button.ts";
import { FieldFrame, FieldHelp, fieldId, LabelText } from "#app/components/field-frame.tsx";
import { PhotoLink } from "#app/components/photo-list.tsx";
import { useProblemText } from "#app/components/problem-text.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { photoProblemCodes, photoWordKeys } from "../phone/photos/photo-words.ts";

type PhotoFieldProps = {
	question: Extract<Question, { type: "photo" }>;
	/** Photos that the server has. */
	photoIds: string[];
	problems: Problem[];
	hrefOf: (photoId: string) => string;
};

/**
 * Photos to take or choose. Without scripts they go with the form, which then comes back with them; with scripts each is
 * kept and sent by itself, and the list below tells how far it is.
 */
export function PhotoField({ question, photoIds, problems, hrefOf }: PhotoFieldProps) {
	const { t, i18n } = useTranslation("grower");
	const words = useProblemText();
	const name = question.key;
	const label = wordsIn(question.text, i18n.language);
	return (
		<FieldFrame problem={problems[0]}>
			<p className="font-bold">
				<LabelText label={label} optional />
			</p>
			<FieldHelp name={name}>{question.help && wordsIn(question.help, i18n.language)}</FieldHelp>
			<div id="photos-problem" role="alert" className="font-bold text-stop">
				{problems.map((problem) => (
					<p key={problem.code}>{words(problem, label)}</p>
				))}
			</div>
			<KeptPhotos photoIds={photoIds} hrefOf={hrefOf} />
			<ul id="photos-here" className="list-none divide-y divide-line" data-words={useScriptWords(question, label)} />
			<output id="photos-word" className="block text-base text-quiet" />
			<div className="mt-4 space-y-4">
				<PhotoBox name={name} id={`${fieldId(name)}-camera`} label={t("photos.take")} camera />
				<PhotoBox name={name} id={fieldId(name)} label={t("photos.choose")} />
			</div>
			<div className="mt-4 in-data-scripted:hidden">
				<Button kind="secondary" name="_stay" value="yes">
					{t("photos.add")}
				</Button>
			</div>
		</FieldFrame>
	);
}

type PhotoBoxProps = { name: string; id: string; label: string; camera?: boolean };

/**
 * A box for files; that for the camera only where there is likely one. Browsers name its button in their own language, so
 * that with scripts, which say themselves what was chosen, its label is the button.
 */
function PhotoBox({ name, id, label, camera }: PhotoBoxProps) {
	return (
		<div
			className={classes(
				"relative w-fit max-w-full rounded-plat has-focus-visible:shadow-[0_0_0_6px_var(--color-ink)] has-focus-visible:outline-3 has-focus-visible:outline-quince",
				camera && "hidden any-pointer-coarse:block",
			)}
		>
			<label htmlFor={id} className="block" data-button={buttonClasses({ kind: "secondary" })}>
				{label}
			</label>
			<input
				id={id}
				name={name}
				type="file"
				accept="image/*"
				capture={camera ? "environment" : undefined}
				multiple={!camera}
				aria-describedby={`help-${name} photos-problem`}
				className={`mt-1 block max-w-full in-data-scripted:sr-only ${fileButton}`}
			/>
		</div>
	);
}

function KeptPhotos({ photoIds, hrefOf }: Pick<PhotoFieldProps, "photoIds" | "hrefOf">) {
	const { t } = useTranslation("grower");
	const format = useFormat();
	return (
		<ul id="photos-kept" className="list-none divide-y divide-line">
			{photoIds.map((photoId, at) => (
				<li key={photoId} className="flex flex-wrap items-start gap-4 py-3">
					<PhotoLink href={hrefOf(photoId)} number={at + 1} />
					<div>
						<p className="mb-2">{t("photos.sent")}</p>
						<Confirm
							trigger={t("photos.remove", { number: format.number(at + 1) })}
							title={t("photos.removeTitle")}
							body={t("photos.removeBody")}
							confirmLabel={t("photos.removeYes")}
							name="_remove"
							value={photoId}
							danger
						/>
					</div>
				</li>
			))}
		</ul>
	);
}

/** What the screen's script is told, as data. */
function useScriptWords({ key }: { key: string }, label: string): string {
	const { t } = useTranslation("grower");
	const words = useProblemText();
	const detail = {
		photo_too_big_limit: { max: mostPhotoBytes / 1024 ** 2 },
		photo_too_many_limit: { max: mostPhotos },
	};
	const problems = photoProblemCodes.map((code) => {
		const most = code in detail ? detail[code as keyof typeof detail] : undefined;
		return [code, words({ field: key, code, detail: most }, label)];
	});
	const said = photoWordKeys.map((word) => [word, t(`photos.${word}`, { number: "{{number}}" })]);
	return JSON.stringify({
		questionKey: key,
		words: { ...Object.fromEntries(said), problems: Object.fromEntries(problems) },
	});
}
