// Package register is the memory of a job: structures, cable spans, design versions, visits with the survey bytes as received, direct
// readings, events and results, in one SQLite file or in PostgreSQL, with one schema (migrations/0001_register.sql describes it).
//
// Rows are only added. A visit is recorded whole or not at all. Results come in and go out as typed rows: this package computes nothing
// about cables, and a caller hands [Register.Verify] the means to compute them again.
package register
