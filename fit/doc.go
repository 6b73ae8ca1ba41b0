// Package fit puts a hanging shape through surveyed points by weighted least squares with errors in both
// coordinates, and returns the shape with its covariance, residuals and tests. It knows nothing of weights,
// forces and files.
package fit
