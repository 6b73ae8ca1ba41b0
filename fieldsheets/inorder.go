package fieldsheets

import (
	"bytes"
	"io"
	"runtime"
	"sync"
)

// bunch is how many pieces one core prints at a time.
const bunch = 32

// inOrder prints n pieces on all cores and writes them in their order. No more than a few bunches are held at a time. The error is that of
// the first piece that fails, or of the writer.
func inOrder(w io.Writer, n int, print func(out *bytes.Buffer, i int) error) error {
	workers := min(runtime.GOMAXPROCS(0), (n+bunch-1)/bunch)
	if workers <= 1 {
		var out bytes.Buffer
		for i := range n {
			out.Reset()
			if err := print(&out, i); err != nil {
				return err
			}
			if _, err := w.Write(out.Bytes()); err != nil {
				return err
			}
		}
		return nil
	}
	texts, errs := make([]bytes.Buffer, 4*workers), make([]error, 4*workers)
	for from := 0; from < n; from += len(texts) * bunch {
		var group sync.WaitGroup
		next := make(chan int, len(texts))
		for k := range texts {
			next <- k
		}
		close(next)
		for range workers {
			group.Go(func() {
				for k := range next {
					texts[k].Reset()
					errs[k] = nil
					start := from + k*bunch
					for i := start; i < min(start+bunch, n) && errs[k] == nil; i++ {
						errs[k] = print(&texts[k], i)
					}
				}
			})
		}
		group.Wait()
		for k := range texts {
			if errs[k] != nil {
				return errs[k]
			}
			if _, err := w.Write(texts[k].Bytes()); err != nil {
				return err
			}
		}
	}
	return nil
}
