// Package history reads the past of one cable span: what its unstressed length and its tension did from visit to visit, which changes
// were recorded and which were not, how fast it drifts, when a limit is reached and when to look again. It computes only; no files.
//
// The figures of n visits are y = X b + e. The columns of X are a constant, one step for every gap between visits in which an event
// changed the cable, and what was found beyond that. The covariance of e is
//
//	V = diag(u² - c²) + c cᵀ
//
// where u is the standard uncertainty of a visit and c the part of it that all visits share (weight, instrument). A shared error
// moves all visits alike, so it widens levels and not differences and fakes no drift. Estimates are those of generalised least squares
// (Aitken 1935).
//
// What was found is chosen from one family: linear drift, drift with the logarithm of time (creep), a step in each gap without a
// recorded one, one visit that is off by itself, and a remainder that goes with temperature. Each candidate adds one parameter, so the
// one with the greatest |z| is also the one with the smallest AIC; as the uncertainties are known, the small-sample correction of AICc
// (Hurvich and Tsai 1989), which pays for an estimated variance, is nil. It is taken when the greatest |z| of the family is beyond
// what chance gives in 5 % of the histories in which there is nothing more: the max-z distribution with its correlations
// (Worsley 1979; Hothorn, Bretz and Westfall 2008), by Bonferroni's bound where that decides and by seeded simulation where not.
// Then the family is searched again given what was found (as in Bai and Perron 1998). What fits nearly as well is named as a rival.
package history
