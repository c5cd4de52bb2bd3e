/** How many values one filter of the data API takes, and how many rows one page holds. */
export const mostValues = 100;
export const mostRows = 10_000;
