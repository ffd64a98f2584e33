package main

import (
	"os"
	"time"

	"github.com/schollz/progressbar/v3"
	"golang.org/x/term"
)

// patience is how long a run stays silent.
const patience = time.Second

// bar shows on a terminal how far a run is. It appears once the run takes longer than patience, without colour.
type bar struct {
	to      *os.File
	begin   time.Time
	showing *progressbar.ProgressBar
}

// newBar begins to wait; nothing is ever shown where the file is no terminal.
func newBar(to *os.File) *bar {
	if !term.IsTerminal(int(to.Fd())) {
		to = nil
	}
	return &bar{to: to, begin: time.Now()}
}

// tell takes the model time done and in all.
func (b *bar) tell(done, total float64) {
	if b.to == nil || time.Since(b.begin) < patience {
		return
	}
	const thousandths = 1000
	if b.showing == nil {
		b.showing = progressbar.NewOptions(thousandths, progressbar.OptionSetWriter(b.to), progressbar.OptionSetWidth(40),
			progressbar.OptionSetDescription("computing"), progressbar.OptionSetPredictTime(true), progressbar.OptionClearOnFinish())
	}
	// An error here is one of the terminal's; the run goes on without its bar.
	_ = b.showing.Set(int(thousandths * done / total))
}

// clear takes the bar off the terminal.
func (b *bar) clear() {
	if b.showing != nil {
		_ = b.showing.Clear()
	}
}
