package main

import (
	"io"
	"os"

	"github.com/mattn/go-isatty"
	"github.com/vbauerster/mpb/v8"
	"github.com/vbauerster/mpb/v8/decor"
)

// progress draws one bar per stage, on a terminal only.
type progress struct {
	bars  *mpb.Progress // nil where there is no terminal
	stage string
	bar   *mpb.Bar
}

func newProgress(w io.Writer) *progress {
	f, ok := w.(*os.File)
	if !ok || !isatty.IsTerminal(f.Fd()) {
		return &progress{}
	}
	return &progress{bars: mpb.New(mpb.WithOutput(f), mpb.WithWidth(40))}
}

// show moves the stage's bar; total 0 means the end is not known yet.
func (p *progress) show(stage string, done, total int64) {
	if p.bars == nil {
		return
	}
	if stage != p.stage {
		p.finish()
		p.stage = stage
		p.bar = p.bars.AddBar(total, mpb.PrependDecorators(decor.Name(stage, decor.WC{W: 10})),
			mpb.AppendDecorators(decor.CurrentNoUnit("%d")))
	}
	if total > 0 {
		p.bar.SetTotal(total, false)
	}
	p.bar.SetCurrent(done)
}

func (p *progress) finish() {
	if p.bar != nil {
		p.bar.SetTotal(-1, true)
	}
}

func (p *progress) end() {
	if p.bars == nil {
		return
	}
	p.finish()
	p.bars.Wait()
}
