package lsp

import (
	"context"
	"flag"
	"fmt"
	"os"
	"testing"
)

// update makes tests write their expectations anew.
var update = flag.Bool("update", false, "write the expectations of marker tests and transcripts anew")

// serverVariable makes the test binary a language server on its standard
// streams, for the tests that talk to a process.
const serverVariable = "PORTLIGHT_TEST_SERVER"

func TestMain(m *testing.M) {
	if os.Getenv(serverVariable) != "" {
		TuneProcess(os.Getenv)
		if err := Serve(context.Background(), os.Stdin, os.Stdout, Options{Version: "test"}); err != nil {
			fmt.Fprintln(os.Stderr, err)
			os.Exit(1)
		}
		os.Exit(0)
	}
	os.Exit(m.Run())
}
