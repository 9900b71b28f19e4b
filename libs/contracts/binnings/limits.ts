/** So many characteristics are classed anew while the request waits; a run classes more. */
export const mostReclassedAtOnce = 10;
