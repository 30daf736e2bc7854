package lsp

import (
	"encoding/json"
	"fmt"
	"os"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"go.lsp.dev/protocol"
)

// largeNetwork is a network file of 10 000 lines with 5 000 parts: sections of
// a filter bank behind one supply, with documentation and blank lines as a
// person leaves them.
func largeNetwork() (text string, parts int) {
	var b strings.Builder
	b.WriteString("## The hydrophone array's filter bank, written by a program.\n\nground hull\n\n")
	b.WriteString("supply -[voltage source Vs = 5 V]- hull\n")
	lines := 5
	for i := 0; lines < 9990; i++ {
		fmt.Fprintf(&b, "\n## Section %d of the bank.\nresistor R%d = 4.7 kΩ ±1 %%\nresistor Q%d = 10 kΩ ±1 %%\ncapacitor C%d = 220 nF ±10 %%\n", i, i, i, i)
		fmt.Fprintf(&b, "supply -[R%d]- mid%d -[inductor L%d = 12 mH]- out%d\n", i, i, i, i)
		fmt.Fprintf(&b, "mid%d -[C%d]- hull # the shunt arm\n", i, i)
		fmt.Fprintf(&b, "out%d -[Q%d || capacitor D%d = 47 nF]- hull\n\n", i, i, i)
		lines += 10
		parts += 5
	}
	b.WriteString("\nport first at out0 hull\n")
	return b.String(), parts + 1
}

// percentiles reports the median and the 99th percentile in milliseconds.
func percentiles(b *testing.B, times []time.Duration) {
	slices.Sort(times)
	b.ReportMetric(float64(times[len(times)/2].Microseconds())/1000, "ms-median")
	b.ReportMetric(float64(times[len(times)*99/100].Microseconds())/1000, "ms-p99")
	b.ReportMetric(float64(times[0].Microseconds())/1000, "ms-least")
}

// served is a server process that holds the large network, for measures of the
// server alone.
type served struct {
	*process
	b       *testing.B
	line    int
	column  int
	version int
	asked   int
}

func serveLarge(b *testing.B) *served {
	b.Helper()
	text, _ := largeNetwork()
	s := &served{process: startProcess(b), b: b, version: 1}
	s.send(b, `{"jsonrpc":"2.0","id":1,"method":"initialize","params":{"processId":null,"rootUri":null,"capabilities":`+fullClient+`}}`)
	s.until(`"id":1`)
	quoted, _ := json.Marshal(text)
	s.send(b, `{"jsonrpc":"2.0","method":"textDocument/didOpen","params":{"textDocument":{"uri":"untitled:large","languageId":"portlight","version":1,"text":`+string(quoted)+`}}}`)
	s.until(`"version":1`)
	s.line = slices.IndexFunc(strings.Split(text, "\n"), func(l string) bool { return strings.HasPrefix(l, "resistor R500 = ") })
	s.column = len("resistor R500 = ")
	return s
}

// receiveRaw reads one message as it is: measures leave its parsing out.
func (s *served) receiveRaw() string {
	body, err := readBody(s.out)
	if err != nil {
		s.b.Fatalf("%v\n%s", err, s.errors.String())
	}
	return string(body)
}

// until reads messages up to one that has a piece of text.
func (s *served) until(piece string) {
	for !strings.Contains(s.receiveRaw(), piece) {
	}
}

// edit changes a digit and waits for the findings of the new version.
func (s *served) edit() {
	s.change()
	s.until(fmt.Sprintf(`"version":%d`, s.version))
}

// change changes a digit.
func (s *served) change() {
	s.version++
	digit := byte('0' + s.version%8 + 1)
	s.send(s.b, fmt.Sprintf(`{"jsonrpc":"2.0","method":"textDocument/didChange","params":{"textDocument":{"uri":"untitled:large","version":%d},`+
		`"contentChanges":[{"range":{"start":{"line":%d,"character":%d},"end":{"line":%d,"character":%d}},"text":"%c"}]}}`,
		s.version, s.line, s.column, s.line, s.column+1, digit))
}

// cpu is the processor time that the server has used.
func (s *served) cpu() time.Duration {
	raw, err := os.ReadFile(fmt.Sprintf("/proc/%d/stat", s.command.Process.Pid))
	if err != nil {
		s.b.Skip("no /proc here: the server's processor time cannot be read")
	}
	fields := strings.Fields(string(raw[strings.LastIndexByte(string(raw), ')')+1:]))
	user, _ := strconv.Atoi(fields[11])
	system, _ := strconv.Atoi(fields[12])
	return time.Duration(user+system) * 10 * time.Millisecond // ticks of 1/100 s
}

// resident is the server's resident memory in MiB.
func (s *served) resident() float64 {
	raw, err := os.ReadFile(fmt.Sprintf("/proc/%d/statm", s.command.Process.Pid))
	if err != nil {
		s.b.Skip("no /proc here: the server's memory cannot be read")
	}
	pages, _ := strconv.Atoi(strings.Fields(string(raw))[1])
	return float64(pages*os.Getpagesize()) / (1 << 20)
}

// Mark: edit → complete findings in 15 ms median, 40 ms at the 99th
// percentile, 15 ms of CPU; 80 MiB of resident memory.
func BenchmarkEditToFindings(b *testing.B) {
	s := serveLarge(b)
	for range 5 {
		s.edit()
	}
	var times []time.Duration
	before := s.cpu()
	for b.Loop() {
		start := time.Now()
		s.edit()
		times = append(times, time.Since(start))
	}
	percentiles(b, times)
	b.ReportMetric(float64((s.cpu()-before).Microseconds())/1000/float64(len(times)), "ms-cpu/edit")
	b.ReportMetric(s.resident(), "MiB")
}

// ask sends a request and waits for its answer.
func (s *served) ask(method, params string) string {
	s.b.Helper()
	s.asked++
	s.send(s.b, fmt.Sprintf(`{"jsonrpc":"2.0","id":"ask%d","method":%q,"params":%s}`, s.asked, method, params))
	for {
		answer := s.receiveRaw()
		if strings.Contains(answer, fmt.Sprintf(`"ask%d"`, s.asked)) {
			if strings.Contains(answer, `"error":{`) {
				s.b.Fatalf("%s: %.300s", method, answer)
			}
			return answer
		}
	}
}

// place is the parameters of a request about a place in the edited line.
func (s *served) place(column int) string {
	return fmt.Sprintf(`{"textDocument":{"uri":"untitled:large"},"position":{"line":%d,"character":%d}}`, s.line, column)
}

const whole = `{"textDocument":{"uri":"untitled:large"}}`

// after measures a request sent together with an edit, and the same again
// when nothing changed.
func after(b *testing.B, method string, params func(s *served) string) {
	b.Run("after an edit", func(b *testing.B) {
		s := serveLarge(b)
		s.ask(method, params(s))
		var times []time.Duration
		for b.Loop() {
			s.change()
			start := time.Now()
			s.ask(method, params(s))
			times = append(times, time.Since(start))
		}
		percentiles(b, times)
	})
	b.Run("warm", func(b *testing.B) {
		s := serveLarge(b)
		s.ask(method, params(s))
		var times []time.Duration
		for b.Loop() {
			start := time.Now()
			s.ask(method, params(s))
			times = append(times, time.Since(start))
		}
		percentiles(b, times)
	})
}

// Mark: after an edit 10 ms, warm 0.5 ms.
func BenchmarkHover(b *testing.B) {
	after(b, protocol.MethodTextDocumentHover, func(s *served) string { return s.place(len("resistor R5")) })
}

// Mark: after an edit 10 ms, warm 0.5 ms.
func BenchmarkCompletion(b *testing.B) {
	after(b, protocol.MethodTextDocumentCompletion, func(s *served) string { return s.place(s.column) })
}

// Mark: 10 ms.
func BenchmarkSemanticTokensFull(b *testing.B) {
	after(b, protocol.MethodTextDocumentSemanticTokensFull, func(*served) string { return whole })
}

// Mark: 3 ms, after an edit whose findings are known.
func BenchmarkSemanticTokensDelta(b *testing.B) {
	s := serveLarge(b)
	id := resultOf(s.ask(protocol.MethodTextDocumentSemanticTokensFull, whole))
	var times []time.Duration
	for b.Loop() {
		s.edit()
		start := time.Now()
		id = resultOf(s.ask(protocol.MethodTextDocumentSemanticTokensFullDelta,
			fmt.Sprintf(`{"textDocument":{"uri":"untitled:large"},"previousResultId":%q}`, id)))
		times = append(times, time.Since(start))
	}
	percentiles(b, times)
}

func resultOf(answer string) string {
	_, rest, _ := strings.Cut(answer, `"resultId":"`)
	id, _, _ := strings.Cut(rest, `"`)
	return id
}

// Mark: 10 ms.
func BenchmarkDocumentSymbols(b *testing.B) {
	after(b, protocol.MethodTextDocumentDocumentSymbol, func(*served) string { return whole })
}

// Mark: 80 MiB of resident memory, and flat over 10 000 edits: the median over
// the last tenth of them is at most a tenth above that over the first.
func BenchmarkMemoryOverEdits(b *testing.B) {
	for b.Loop() {
		s := serveLarge(b)
		const edits = 10_000
		var sizes []float64
		for range edits {
			s.edit()
			sizes = append(sizes, s.resident())
		}
		median := func(list []float64) float64 { slices.Sort(list); return list[len(list)/2] }
		early, late := median(sizes[:edits/10]), median(sizes[edits*9/10:])
		b.ReportMetric(early, "MiB-early")
		b.ReportMetric(late, "MiB-late")
		b.ReportMetric(slices.Max(sizes), "MiB-most")
		if late > 1.1*early {
			b.Errorf("resident memory grew from %.0f to %.0f MiB", early, late)
		}
	}
}
