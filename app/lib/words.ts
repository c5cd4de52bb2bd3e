import { z } from "zod";

/** One text in every language of the product. What lacks a language does not parse. */
export const Words = z.object({ en: z.string().min(1), es: z.string().min(1) });
export type Words = z.infer<typeof Words>;
