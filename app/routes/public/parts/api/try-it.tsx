import { type FormEvent, useState } from "react";
import { useTranslation } from "react-i18next";
import { Button } from "#app/components/button.tsx";
import { CopyButton } from "#app/components/copy-button.tsx";
import { fieldId, inputClasses } from "#app/components/field-frame.tsx";
import { useHydrated } from "#app/components/use-hydrated.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { codeLanguages, type SnippetLanguage, snippetLanguages, snippetOf } from "./snippets.ts";
import type { ToldOperation } from "./told-operations.ts";

type TryItProps = { operation: ToldOperation; root: string; filled: Record<string, string> };
type Tried = { status: number; milliseconds: number; text: string } | "failed";

/** As much of an answer as is shown on the page. */
const mostShown = 3000;

/** An address to fill in, to try at once and to take along as code. */
export function TryIt({ operation, root, filled }: TryItProps) {
	const { t } = useTranslation("dataroom");
	const [values, setValues] = useState(filled);
	const [tried, setTried] = useState<Tried | null>(null);
	const [busy, setBusy] = useState(false);
	const hydrated = useHydrated();
	const address = addressOf(operation, root, values);
	const send = (event: FormEvent) => {
		event.preventDefault();
		setBusy(true);
		void ask(address)
			.then(setTried)
			.finally(() => setBusy(false));
	};
	return (
		<div className="mt-4 border border-rule bg-sheet p-4">
			{hydrated && (
				<form onSubmit={send} className="flex flex-wrap items-end gap-3">
					{operation.parameters.map(({ name, example }) => (
						<div key={name} className="min-w-32">
							<label htmlFor={fieldId(`${operation.id}-${name}`)} className="block text-sm font-bold">
								{name}
							</label>
							<input
								id={fieldId(`${operation.id}-${name}`)}
								value={values[name] ?? ""}
								placeholder={example ?? undefined}
								maxLength={400}
								autoCapitalize="none"
								spellCheck={false}
								onChange={({ target }) => setValues({ ...values, [name]: target.value })}
								className={`${inputClasses()} mt-1 w-full`}
							/>
						</div>
					))}
					<Button kind="secondary" busy={busy}>
						{t("api.page.try", { name: t(`api.operation.${operation.id}.name`) })}
					</Button>
				</form>
			)}
			<p className="mt-3 text-sm wrap-anywhere">
				<a href={address}>{address}</a>
			</p>
			<output className="block">{tried && <TriedAnswer tried={tried} />}</output>
			<Snippets operation={operation} address={address} />
		</div>
	);
}

function TriedAnswer({ tried }: { tried: Tried }) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	if (tried === "failed") return <p className="mt-3 font-bold">{t("api.page.failed")}</p>;
	const { status, milliseconds, text } = tried;
	return (
		<>
			<p className="mt-3 font-bold">
				{t("api.page.answered", { status: String(status), milliseconds: format.number(milliseconds) })}
			</p>
			<Code text={text.length > mostShown ? `${text.slice(0, mostShown)} …` : text} label={t("api.page.answer")} />
		</>
	);
}

function Snippets({ operation, address }: { operation: ToldOperation; address: string }) {
	const { t } = useTranslation("dataroom");
	const fileName = operation.id === "file" ? address.split("/").at(-1)! : null;
	const text = (language: SnippetLanguage) =>
		snippetOf(language, address, { csv: operation.types.includes("text/csv"), fileName });
	return (
		<details className="mt-3">
			<summary className="min-h-9 cursor-pointer py-1 font-bold text-damson">{t("api.page.code")}</summary>
			{snippetLanguages.map((language) => (
				<div key={language} className="mt-3">
					<p className="flex flex-wrap items-center gap-3 font-bold">
						{codeLanguages[language]}
						<CopyButton text={text(language)} label={t("api.page.copy", { language: codeLanguages[language] })} />
					</p>
					<Code text={text(language)} label={codeLanguages[language]} />
				</div>
			))}
		</details>
	);
}

function Code({ text, label }: { text: string; label: string }) {
	return (
		<section
			aria-label={label}
			// Scrolled by keyboard only while in focus.
			// oxlint-disable-next-line jsx-a11y/no-noninteractive-tabindex
			tabIndex={0}
			className="mt-2 max-h-96 overflow-auto border border-line bg-paper p-3 text-sm"
		>
			<pre>
				<code>{text}</code>
			</pre>
		</section>
	);
}

function addressOf({ path, parameters }: ToldOperation, root: string, values: Record<string, string>): string {
	const search = new URLSearchParams();
	let place = path;
	for (const { name, in: where } of parameters) {
		const value = values[name]?.trim() ?? "";
		if (where === "path") place = place.replace(`{${name}}`, encodeURIComponent(value));
		else if (value !== "") search.set(name, value);
	}
	// A comma joins values and may stand as it is, which reads better.
	const query = search.toString().replaceAll("%2C", ",");
	return `${root}${place}${query ? `?${query}` : ""}`;
}

async function ask(address: string): Promise<Tried> {
	const began = performance.now();
	try {
		const response = await fetch(new URL(address).pathname + new URL(address).search);
		const isText = /json|csv|text/.test(response.headers.get("content-type") ?? "");
		const text = isText ? await response.text() : "";
		return { status: response.status, milliseconds: Math.round(performance.now() - began), text: pretty(text) };
	} catch {
		return "failed";
	}
}

function pretty(text: string): string {
	try {
		return JSON.stringify(JSON.parse(text), null, 2);
	} catch {
		return text;
	}
}
