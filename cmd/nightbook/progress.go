package main

import (
	"fmt"
	"os"
	"time"

	"github.com/schollz/progressbar/v3"
	"golang.org/x/term"
)

// bar is a progress bar over the bytes of the position file. Without a
// terminal it draws nothing.
type bar struct {
	*progressbar.ProgressBar
	size           int64
	started, drawn time.Time
}

func (c *console) progress(size int64) *bar {
	f, ok := c.w.(*os.File)
	if c.json != nil || !ok || !term.IsTerminal(int(f.Fd())) || size <= 0 {
		return &bar{}
	}
	return &bar{
		ProgressBar: progressbar.NewOptions64(size, progressbar.OptionSetWriter(f), progressbar.OptionSetDescription("pricing"),
			progressbar.OptionSetWidth(20), progressbar.OptionShowDescriptionAtLineEnd(), progressbar.OptionClearOnFinish(),
			progressbar.OptionSetPredictTime(false), progressbar.OptionSetElapsedTime(false)),
		size: size, started: time.Now(),
	}
}

// redraw is how often the bar is drawn at most.
const redraw = 100 * time.Millisecond

// reach moves the bar to a place in the file, which so many rows stand before.
func (b *bar) reach(bytes, rows int64) {
	if b.ProgressBar == nil || time.Since(b.drawn) < redraw {
		return
	}
	b.drawn = time.Now()
	b.Describe(progressText(rows, bytes, b.size, time.Since(b.started)))
	b.Set64(bytes)
}

// finish clears the bar away.
func (b *bar) finish() {
	if b.ProgressBar != nil {
		b.Finish()
	}
}

// progressText tells rows, rate and time left.
func progressText(rows, bytes, size int64, took time.Duration) string {
	text := fmt.Sprintf("%s rows", grouped(float64(rows), 0))
	if bytes <= 0 || took <= 0 {
		return text
	}
	left := time.Duration(float64(took) * float64(max(size-bytes, 0)) / float64(bytes))
	return fmt.Sprintf("%s, %s a second, %v left", text, grouped(float64(rows)/took.Seconds(), 0), left.Round(time.Second))
}
