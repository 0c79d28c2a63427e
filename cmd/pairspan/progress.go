package main

import (
	"fmt"
	"io"
	"os"
	"sync"
	"time"
)

// quietFor is how long work may take before a terminal is told of it.
const quietFor = 400 * time.Millisecond

// progress tells a terminal how far long work has come; elsewhere it is nil.
func progress(w io.Writer) func(done, total int) {
	tell := progressOf(w)
	if tell == nil {
		return nil
	}
	return func(done, total int) { tell("planning", done, total) }
}

// progressOf is progress for work of several tasks, one after the other.
func progressOf(w io.Writer) func(task string, done, total int) {
	f, ok := w.(*os.File)
	if !ok {
		return nil
	}
	if info, err := f.Stat(); err != nil || info.Mode()&os.ModeCharDevice == 0 {
		return nil
	}
	var mu sync.Mutex
	start, last, shown := time.Now(), "", -1
	return func(task string, done, total int) {
		mu.Lock()
		defer mu.Unlock()
		if task != last {
			last, shown = task, -1
		}
		per := 100 * done / total
		if per <= shown || time.Since(start) < quietFor {
			return
		}
		shown = per
		fmt.Fprintf(f, "\r\x1b[K%s %3d %%", task, per)
		if done == total {
			fmt.Fprint(f, "\r\x1b[K")
		}
	}
}
