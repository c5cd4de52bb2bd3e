import type { Part } from "./line.ts";
import { pages } from "./pages.ts";
import { protect } from "./protect.ts";
import { submission } from "./submission.ts";
import { tally } from "./tally.ts";

/** What can be measured, by the name to ask for it with. A new part is a file beside this one and a line here. */
export const parts: Record<string, Part> = { tally, submission, pages, protect };
