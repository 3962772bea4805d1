package cli

import (
	"errors"

	"sixdown/cmd/sixdown/internal/atomicfile"
)

// createOutput begins to write a file, whole or not at all. It refuses to replace one that is being read.
func createOutput(path string, inputs ...string) (*atomicfile.File, error) {
	for _, in := range inputs {
		if atomicfile.Same(path, in) {
			return nil, usageFault(path, "it is also what is read", "give another name or folder")
		}
	}
	f, err := atomicfile.Create(path)
	if err != nil {
		return nil, machineFault(path, err, "give a name that can be written")
	}
	return f, nil
}

// outputFault is a failure while writing path: a sentence of the rendering itself stays as it is, a
// failure of the disk is the machine's.
func outputFault(path string, err error) error {
	var disk interface{ Timeout() bool } // what the operating system's errors have
	if errors.As(err, &disk) {
		return machineFault(path, err, "make room on the disk, close the program that has it open, or give another folder")
	}
	return err
}
