import type { Question } from "#app/collect/form.ts";

/** The last question of every form; nobody has to answer it. */
export const noteQuestion: Question = {
	key: "comment",
	type: "long_text",
	text: {
		en: "Anything your extension associate should know?",
		es: "¿Algo que deba saber su asesor de extensión?",
	},
	label: { en: "Your note", es: "Su nota" },
	help: {
		en: "Read by your state's associates only, never published.",
		es: "Solo lo leen los asesores de su estado; nunca se publica.",
	},
	required: false,
	maxLength: 5000,
	sensitive: false,
};
