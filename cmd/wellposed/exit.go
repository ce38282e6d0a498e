package main

// Exit codes. When several apply, the largest is returned.
const (
	// exitClean: nothing at or above the level.
	exitClean = 0
	// exitFindings: findings at or above the level; for format --check, files
	// that are not in canonical form.
	exitFindings = 1
	// exitBroken: a `require` promise is not kept or not shown to be kept.
	exitBroken = 2
	// exitNotDecided: something is not decided, under --strict.
	exitNotDecided = 3
	// exitUnreadable: a model or a data file could not be read.
	exitUnreadable = 4
	// exitUsage: the command line could not be understood.
	exitUsage = 64
	// exitFault: the program failed; please report it.
	exitFault = 70
)
