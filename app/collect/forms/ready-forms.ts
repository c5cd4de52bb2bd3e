import { afterFreeze } from "./after-freeze.ts";
import { afterHarvest } from "./after-harvest.ts";
import { bloomWatch } from "./bloom-watch.ts";
import { pests } from "./pests.ts";

/** The forms that ship ready to use, in the order of the season. */
export const readyForms = { bloom_watch: bloomWatch, after_freeze: afterFreeze, pests, after_harvest: afterHarvest };
export type ReadyFormKey = keyof typeof readyForms;
export const readyFormKeys = Object.keys(readyForms) as [ReadyFormKey, ...ReadyFormKey[]];
