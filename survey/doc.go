// Package survey reads what was brought back from site: coordinate files, design values and the conditions of a
// visit. It returns points in one frame, in metres, grouped by cable and span, and says everything that it had to
// assume. It knows nothing of shapes and forces.
package survey
