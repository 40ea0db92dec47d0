package press

import (
	"bytes"
	"compress/zlib"
	"encoding/binary"
	"fmt"
	"io"
	"strconv"
	"testing"

	"golang.org/x/image/font/gofont/goregular"

	"escapement/engine/scene"
)

// Two fonts that were written at different times are the same afterwards, and their
// checksums are right: the whole adds up to the number that the format asks for.
func TestStopClock(t *testing.T) {
	var first []byte
	for _, second := range []byte{1, 2} {
		font := bytes.Clone(goregular.TTF)
		for i := range int(binary.BigEndian.Uint16(font[4:])) {
			if record := font[12+16*i:]; string(record[:4]) == "head" {
				font[binary.BigEndian.Uint32(record[8:])+35] = second
			}
		}
		if err := stopClock(font); err != nil {
			t.Fatal(err)
		}
		if got := checksum(font); got != 0xB1B0AFBA {
			t.Errorf("the font adds up to %X", got)
		}
		if first == nil {
			first = font
		} else if !bytes.Equal(first, font) {
			t.Error("fonts of different times differ")
		}
	}
	if stopClock(first[:100]) == nil {
		t.Error("a font without its tables is taken")
	}
}

// The table of a PDF points at its objects, and its fonts hold no time.
func TestPDFPointsAtItsObjects(t *testing.T) {
	var b bytes.Buffer
	if err := PDF(&b, drawing(t, "device_upper_rate.log", scene.Options{Caution: true})); err != nil {
		t.Fatal(err)
	}
	file := b.Bytes()
	m := startXref.FindSubmatch(file)
	if m == nil {
		t.Fatal("no table")
	}
	table, _ := strconv.Atoi(string(m[1]))
	fonts := 0
	for i, e := range entry.FindAllSubmatch(file[table:], -1) {
		at, _ := strconv.Atoi(string(e[1]))
		if want := fmt.Appendf(nil, "%d 0 obj\n", i+1); !bytes.HasPrefix(file[at:], want) {
			t.Fatalf("object %d is not at %d", i+1, at)
		}
		s := stream.FindSubmatchIndex(file[at:])
		next := bytes.Index(file[at:], []byte("endobj"))
		if s == nil || s[0] > next {
			continue
		}
		n, _ := strconv.Atoi(string(file[at+s[2] : at+s[3]]))
		body := file[at+s[1]:]
		if !bytes.HasPrefix(body[n:], []byte("\nendstream")) {
			t.Fatalf("object %d is not %d bytes long", i+1, n)
		}
		z, err := zlib.NewReader(bytes.NewReader(body[:n]))
		if err != nil {
			t.Fatal(err)
		}
		if font, err := io.ReadAll(z); err == nil && bytes.HasPrefix(font, []byte{0, 1, 0, 0}) {
			fonts++
			if got := checksum(font); got != 0xB1B0AFBA {
				t.Errorf("object %d: the font adds up to %X", i+1, got)
			}
		}
	}
	if fonts != 2 {
		t.Errorf("%d fonts, want regular and bold", fonts)
	}
	if _, err := steady(file[:len(file)-9]); err == nil {
		t.Error("a torn file is taken")
	}
}
