/** Where what a page sends says whose page it is, so that nobody sends in another's name what another typed. */
export const sentByHeader = "x-sent-by";
export const sentByParam = "sent-by";
