module tautbook

go 1.26.8
