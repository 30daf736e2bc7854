package lsp

import (
	"os"
	"runtime"
	"syscall"
	"time"
)

// lookAtParent is how often a server looks whether its client still runs.
const lookAtParent = 10 * time.Second

// watchParent ends the session when the client's process is gone without a
// word. The end of the input tells that too, unless somebody else holds the
// pipe open.
func (s *session) watchParent(pid int32) {
	if runtime.GOOS == "windows" || pid <= 0 {
		return // no signal asks there
	}
	process, err := os.FindProcess(int(pid))
	if err != nil {
		return
	}
	tick := time.NewTicker(lookAtParent)
	defer tick.Stop()
	for {
		select {
		case <-s.life.Done():
			return
		case <-tick.C:
			if err := process.Signal(syscall.Signal(0)); err == os.ErrProcessDone || err == syscall.ESRCH {
				s.exit()
				return
			}
		}
	}
}
