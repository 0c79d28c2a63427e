package plan

import "sync/atomic"

// ticker counts what is done of the whole plan. It may tick from several
// goroutines.
type ticker struct {
	done  atomic.Int64
	total int
	told  func(done, total int) // nil: nobody asks
}

func (t *ticker) tick() {
	if n := t.done.Add(1); t.told != nil {
		t.told(int(n), t.total)
	}
}
