package main

import (
	"sync"

	"github.com/vbauerster/mpb/v8"
	"github.com/vbauerster/mpb/v8/decor"
)

// progress draws a bar with the time left, where people can see it. update may be
// called from any goroutine; finish has to be called in the end, and removes the
// bar.
func (e *environment) progress(name string, quiet bool) (update func(done, total int), finish func()) {
	if quiet || !e.live {
		return nil, func() {}
	}
	eta := decor.AverageETA(decor.ET_STYLE_GO)
	left := decor.Any(func(s decor.Statistics) string {
		if s.Current == 0 {
			return "reading"
		}
		time, _ := eta.Decor(s)
		return time + " left"
	})
	bars := mpb.New(mpb.WithOutput(e.stderr), mpb.WithWidth(40), mpb.WithAutoRefresh())
	bar := bars.AddBar(0, // the total comes with the first update
		mpb.PrependDecorators(decor.Name(name+" "), decor.Percentage(decor.WCSyncSpace)),
		mpb.AppendDecorators(left),
		mpb.BarRemoveOnComplete())
	var once sync.Once
	update = func(done, total int) {
		bar.SetTotal(int64(total), false)
		bar.SetCurrent(int64(done))
	}
	return update, func() {
		once.Do(func() {
			bar.Abort(true)
			bars.Wait()
		})
	}
}
