import { z } from "zod";

/**
 * What a survey's answers are weighted by. `design`: each stands for the operations of its stratum, N_h / n_h. The others set
 * out from that and meet more of what is known of the frame: `post_stratified` how many operations each district has; `raked`
 * that and how many each stratum has; `linear` how many each stratum has and the bearing trees of the crop in each state.
 * Counts by stratum alone are no choice of their own: design weights meet them already.
 */
export const weightings = ["design", "post_stratified", "raked", "linear"] as const;
export const Weighting = z.enum(weightings);
export type Weighting = z.infer<typeof Weighting>;
