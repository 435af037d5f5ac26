package pipeline

import (
	"io"
	"os"
	"runtime"
	"time"

	"github.com/rs/zerolog"
)

// runLog writes run.log, the one file of a result that knows the clock and the
// host. Nothing in it is digested.
type runLog struct {
	log   zerolog.Logger
	start time.Time
}

func newRunLog(w io.Writer, workers int) *runLog {
	l := &runLog{log: zerolog.New(w).With().Timestamp().Logger(), start: time.Now()}
	host, _ := os.Hostname()
	l.log.Info().Str("version", Version).Str("host", host).Str("system", runtime.GOOS+"/"+runtime.GOARCH).
		Str("go", runtime.Version()).Int("workers", workers).Msg("run starts")
	return l
}

// stage notes that a stage has ended.
func (l *runLog) stage(name string, rows int64) {
	l.log.Info().Str("stage", name).Int64("rows", rows).Float64("seconds", time.Since(l.start).Seconds()).Msg("stage done")
}
