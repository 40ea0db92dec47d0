package link

import (
	"bytes"
	"compress/zlib"
	"encoding/base64"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"escapement/engine/plan"
	"escapement/presets"
)

func pack(text string) string {
	var b bytes.Buffer
	z := zlib.NewWriter(&b)
	_, _ = z.Write([]byte(text))
	_ = z.Close()
	return Prefix + base64.RawURLEncoding.EncodeToString(b.Bytes())
}

func TestEveryPresetTravelsInALink(t *testing.T) {
	for _, p := range presets.List() {
		data, _ := presets.Read(p.Name)
		want, err := plan.Decode(data)
		if err != nil {
			t.Fatal(err)
		}
		fragment, err := Encode(want)
		if err != nil {
			t.Fatal(err)
		}
		if len(fragment) > 2000 {
			t.Errorf("%s: %d letters; programs cut longer addresses", p.Name, len(fragment))
		}
		got, err := Decode("https://example.org/escapement/" + fragment)
		if err != nil || !bytes.Equal(got.Encode(), want.Encode()) {
			t.Errorf("%s: came back as %s (%v)", p.Name, got.Encode(), err)
		}
	}
}

func TestABadLinkIsToldInWords(t *testing.T) {
	whole := pack(`{"format":"escapement-plan/1"}`)
	bomb := pack(`{"format":"escapement-plan/1","note":"` + strings.Repeat("a", 4<<20) + `"}`)
	if len(bomb) > 8<<10 {
		t.Fatalf("the bomb has %d letters: it tests nothing", len(bomb))
	}
	for _, c := range []struct{ name, link, want string }{
		{"no fragment", "https://example.org/", "link: no plan; allowed: an address that goes on with #plan= and the plan"},
		{"empty", "#plan=", "link: nothing after #plan=; allowed: a plan"},
		{"a full stop after it", whole + ".", `link: '.' at place `},
		{"a line break in it", whole[:12] + "\n" + whole[12:], `link: '\n' at place 7`},
		{"truncated", whole[:len(whole)-9], "link: a plan that is cut off or changed on its way; allowed: a link that is whole"},
		{"cut in the middle of a letter", Prefix + "abcde", "link: 5 letters, which no text is packed to"},
		{"only a head", Prefix + "eA", "cut off"},
		{"changed", whole[:14] + "x" + whole[15:], "cut off or changed"},
		{"something after it", pack(`{"format":"escapement-plan/1"}`+" ") + "abcd", "cut off or changed"},
		{"not deflated", Prefix + base64.RawURLEncoding.EncodeToString([]byte(`{"format":"escapement-plan/1"}`)), "cut off or changed"},
		{"a bomb", bomb, "link: a plan of more than 1048576 bytes; allowed: up to 1048576 bytes"},
		{"not JSON", pack("hello"), "not JSON"},
		{"another format", pack(`{"format":"escapement-plan/9"}`), `format: "escapement-plan/9"; allowed: "escapement-plan/1"`},
		{"keys of a prototype", pack(`{"format":"escapement-plan/1","__proto__":{"span_ms":1}}`), "__proto__: a field that is not known"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Decode(c.link)
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got %v, want %s", err, c.want)
			}
			if got := strings.HasPrefix(c.want, "link:") || strings.Contains(c.want, "cut off"); got != IsDamage(err) {
				t.Errorf("damage of the link: %v, want %v", IsDamage(err), got)
			}
		})
	}
}

// Any title and note survive, whatever letters they hold.
func TestAnyTextTravelsInALink(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := plan.Default()
		p.Title = rapid.StringN(0, 100, 200).Draw(t, "title")
		p.Note = rapid.StringN(0, 1000, 4000).Draw(t, "note")
		fragment, err := Encode(p)
		if err != nil {
			t.Fatal(err)
		}
		got, err := Decode(fragment)
		if err != nil {
			t.Fatal(err)
		}
		if got.Title != p.Title || got.Note != p.Note {
			t.Fatalf("came back as %q, %q", got.Title, got.Note)
		}
	})
}

// Nothing that stands behind #plan= makes Decode fail in another way than by an
// error, and what it accepts encodes to a link of the same plan.
func FuzzDecode(f *testing.F) {
	f.Add(pack(`{"format":"escapement-plan/1"}`))
	f.Add(pack(`{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":90}}}`))
	f.Add(pack(strings.Repeat("a", 2<<20)))
	f.Add(pack("[]"))
	f.Add(Prefix + "eNo")
	f.Fuzz(func(t *testing.T, link string) {
		p, err := Decode(link)
		if err != nil {
			return
		}
		again, err := Encode(p)
		if err != nil {
			t.Fatal(err)
		}
		q, err := Decode(again)
		if err != nil || !bytes.Equal(p.Encode(), q.Encode()) {
			t.Fatalf("%s came back as another plan (%v)", link, err)
		}
	})
}
