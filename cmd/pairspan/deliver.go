package main

import (
	"bytes"
	"fmt"
	"io"
	"path/filepath"
)

// deliver writes the folder, where one is asked for, and then standard output:
// whole or not at all. folder returns which of its files to open.
func (c *commands) deliver(dir string, write func(io.Writer) error, folder func() (toOpen string, err error)) error {
	var b bytes.Buffer
	if err := write(&b); err != nil {
		return outputError{err}
	}
	if dir != "" {
		toOpen, err := folder()
		if err != nil {
			return outputError{err}
		}
		fmt.Fprintln(c.errs, "Report: "+filepath.Join(dir, toOpen))
	}
	if _, err := c.out.Write(b.Bytes()); err != nil {
		return outputError{err}
	}
	return nil
}
