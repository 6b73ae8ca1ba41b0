// Package fieldsheets prints assessments: text for a terminal, JSON and CSV for programs, HTML for paper and screens. All of
// them are made from one Report, and every figure a person reads is formed in one place. It does not know how a result was
// found.
package fieldsheets
