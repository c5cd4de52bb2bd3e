import { useTranslation } from "react-i18next";
import { classes } from "#app/components/classes.ts";
import { describedBy, fieldId, FieldProblem, inputClasses } from "#app/components/field-frame.tsx";
import type { Problem } from "#app/lib/parse-form.ts";

type CrateBoxProps = {
	name: string;
	/** What is answered in crates. */
	question: string;
	value: string | string[] | undefined;
	problem: Problem | undefined;
};

/** What the grower's own crate holds. Style alone hides it while another unit is chosen, so that it needs no script. */
export function CrateBox({ name, question, value, problem }: CrateBoxProps) {
	const { t } = useTranslation("grower");
	const unlessChosen = "group-not-has-[option[value=crate]:checked]/field:hidden";
	return (
		<div className={classes("mt-2", !problem && unlessChosen)}>
			<FieldProblem name={name} label={t("screen.crateWeight")} problem={problem} />
			<label htmlFor={fieldId(name)} className="inline-flex min-h-11 flex-wrap items-center gap-2">
				{t("screen.crateHolds")}
				<input
					id={fieldId(name)}
					name={name}
					defaultValue={typeof value === "string" ? value : ""}
					inputMode="decimal"
					autoComplete="off"
					aria-describedby={classes(`about-${name}`, describedBy(name, null, problem))}
					aria-invalid={problem ? true : undefined}
					className={classes(inputClasses(problem), "w-24")}
				/>
				{t("screen.unit.lb")}
			</label>
			<span id={`about-${name}`} className="sr-only">
				{t("screen.crateFor", { question })}
			</span>
		</div>
	);
}
