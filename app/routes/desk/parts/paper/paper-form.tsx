import { classes } from "#app/components/classes.ts";
import type { PaperQuestion, PaperSheet } from "./paper-sheet.server.ts";

/** `onPaperOnly`: the screen does without it. */
type PaperFormSheetProps = { sheet: PaperSheet; size: "letter" | "a4"; onPaperOnly: boolean };

/** One printed form: what it is for, the promise, and the questions with room to write. */
export function PaperFormSheet({ sheet, size, onPaperOnly }: PaperFormSheetProps) {
	return (
		<article
			lang={sheet.language}
			className={classes(
				`paper-form paper-${size} mb-10 border border-rule p-6 text-sm print:m-0 print:border-0 print:p-0`,
				onPaperOnly && "hidden",
			)}
		>
			<div className="paper-running hidden">
				<p className="pb-3 text-xs">
					{sheet.number}, {sheet.lines[0]}
				</p>
			</div>
			<div className="flex items-start justify-between gap-6 border-b-2 border-line pb-2">
				<div>
					<h2 className="text-xl">{sheet.title}</h2>
					{sheet.lines.filter(Boolean).map((line) => (
						<p key={line}>{line}</p>
					))}
				</div>
				<p className="shrink-0 border border-line px-3 py-1 font-bold">{sheet.number}</p>
			</div>
			<p className="mt-2 font-bold">{sheet.returnBy}</p>
			<div className="mt-2 break-inside-avoid text-xs">
				<p className="font-bold">{sheet.pledge.title}</p>
				<ul className="list-disc pl-5">
					{sheet.pledge.lines.map((line) => (
						<li key={line}>{line}</li>
					))}
				</ul>
			</div>
			<p className="mt-2">{sheet.howTo}</p>
			{sheet.steps.map((step) => (
				<section key={step.key} className="mt-4 border-t border-line pt-2">
					<h3 className="text-base">{step.title}</h3>
					{step.notes.map((note) => (
						<p key={note} className="text-xs">
							{note}
						</p>
					))}
					<div className="mt-1 grid gap-x-8 gap-y-3 sm:grid-cols-2 print:grid-cols-2">
						{step.questions.map((question) => (
							<Asked key={question.key} question={question} />
						))}
					</div>
				</section>
			))}
			<p className="mt-4 font-bold">{sheet.thanks}</p>
		</article>
	);
}

function Asked({ question }: { question: PaperQuestion }) {
	const { text, help, known, kind, choices, silences, rows } = question;
	return (
		<div className="break-inside-avoid">
			<p className="font-bold">{text}</p>
			{help && <p className="text-xs">{help}</p>}
			{known && <p className="text-xs">{known}</p>}
			{kind === "options" ? (
				<ul className="mt-1">
					{choices.map((choice) => (
						<li key={choice}>
							<Box /> {choice}
						</li>
					))}
				</ul>
			) : (
				<Room kind={kind} units={choices} rows={rows} />
			)}
			{silences.length > 0 && (
				<p className="mt-1 text-xs">
					{silences.map((silence) => (
						<span key={silence} className="mr-4 whitespace-nowrap">
							<Box /> {silence}
						</span>
					))}
				</p>
			)}
		</div>
	);
}

function Room({ kind, units, rows }: { kind: "amount" | "day" | "words"; units: string[]; rows: number }) {
	if (kind === "words")
		return Array.from({ length: rows }, (_, row) => <span key={row} className="block h-8 border-b border-line" />);
	return (
		<p className="mt-1 flex flex-wrap items-end gap-x-3">
			<span className="inline-block h-8 w-28 border-b border-line" />
			{units.map((unit) => (
				<span key={unit} className="whitespace-nowrap">
					{units.length > 1 && <Box />} {unit}
				</span>
			))}
		</p>
	);
}

function Box() {
	return <span aria-hidden="true" className="inline-block size-3 border border-line align-[-0.1em]" />;
}
