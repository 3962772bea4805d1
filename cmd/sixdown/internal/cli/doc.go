// Package cli is the command line: it reads flags and files, asks the rooms that know, and prints.
//
// Each command is a file: newXCmd makes it, its flags fill an xOptions, and runX does the work on streams and
// options alone, so that it can be called without cobra. Commands are listed in commands.go.
//
// Answers go to standard output, each in one piece: a table for people, one JSON document, or CSV. Warnings,
// errors and progress go to standard error. A command returns an error and never exits; Main turns the error
// into a message and an exit code.
package cli
