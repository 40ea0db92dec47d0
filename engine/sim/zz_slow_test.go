package sim

import (
	"fmt"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"escapement/engine/plan"
)

func TestZZSlow(t *testing.T) {
	files, _ := filepath.Glob(os.Getenv("FZ") + "/*")
	fmt.Println(len(files))
	for _, f := range files {
		b, _ := os.ReadFile(f)
		line := strings.SplitN(string(b), "\n", 3)[1]
		line = strings.TrimSuffix(strings.TrimPrefix(line, "[]byte("), ")")
		s, err := strconv.Unquote(line)
		if err != nil {
			continue
		}
		t0 := time.Now()
		p, err := plan.Decode([]byte(s))
		if err != nil {
			continue
		}
		prog, err := p.Compile()
		t1 := time.Since(t0)
		if err == nil {
			m := New(prog)
			m.Run(5000)
		}
		if d := time.Since(t0); d > 50*time.Millisecond {
			fmt.Println(f, d, t1, s)
		}
	}
}
