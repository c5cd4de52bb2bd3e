export type DemoPerson = {
	subject: string;
	name: string;
	email: string;
	role: "coordinator" | "associate" | "researcher" | "grower";
	/** Researchers: whether access was granted already. */
	approved?: boolean;
	/** States of an associate's grants; a grower's operation lies in the one named. */
	stateFips: string[];
	language: "en" | "es";
	note: { en: string; es: string };
};
export const people: DemoPerson[];
