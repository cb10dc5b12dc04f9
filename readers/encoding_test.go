package readers_test

import (
	"strings"
	"testing"
	"unicode/utf16"

	"footing/readers"
)

// utf16Bytes writes a text in UTF-16, low byte first unless big.
func utf16Bytes(s string, big bool) string {
	var b strings.Builder
	for _, u := range utf16.Encode([]rune(s)) {
		if big {
			b.WriteByte(byte(u >> 8))
		}
		b.WriteByte(byte(u))
		if !big {
			b.WriteByte(byte(u >> 8))
		}
	}
	return b.String()
}

func TestEncodings(t *testing.T) {
	const text = "Stelle,Höhe (m)\nFjällräv,1\n𝔉,2\n"
	const want = "header 1: A Stelle text; B Höhe [m] number;\n2: \"Fjällräv\" 1\n3: \"𝔉\" 2\n"
	latin := strings.NewReplacer("ö", "\xf6", "ä", "\xe4", "𝔉", "\x80").Replace(text)
	for _, c := range []struct {
		name, bytes, option, want, encoding string
	}{
		{"UTF-8", text, "", want, "UTF-8"},
		{"UTF-8 with a mark", "\ufeff" + text, "", want, "UTF-8"},
		{"a mark before a quote", "\ufeff\"Stelle\",Höhe (m)\nFjällräv,1\n𝔉,2\n", "", want, "UTF-8"},
		{"UTF-16 LE with a mark", "\xff\xfe" + utf16Bytes(text, false), "", want, "UTF-16LE"},
		{"UTF-16 BE with a mark", "\xfe\xff" + utf16Bytes(text, true), "", want, "UTF-16BE"},
		{"UTF-16 LE that is told", utf16Bytes(text, false), "utf-16le", want, "UTF-16LE"},
		{"UTF-16 BE that is told", utf16Bytes(text, true), "UTF-16BE", want, "UTF-16BE"},
		{"UTF-16 that is told, with a mark", "\xfe\xff" + utf16Bytes(text, true), "utf-16", want, "UTF-16BE"},
		{"Windows-1252", latin, "", strings.ReplaceAll(want, "𝔉", "€"), "Windows-1252"},
		{"Windows-1252 that is told", latin, "windows-1252", strings.ReplaceAll(want, "𝔉", "€"), "Windows-1252"},
		{"UTF-8 read as Windows-1252, because it was told", "a,b\né,1\nx,2\n", "windows-1252", "header 1: A a text; B b number;\n2: \"Ã©\" 1\n3: \"x\" 2", "Windows-1252"},
		{"Shift JIS", "a,b\n\x8a\x43\x91\x90,1\nx,2\n", "shift_jis", "header 1: A a text; B b number;\n2: \"海草\" 1\n3: \"x\" 2", "shift_jis"},
		{"ASCII", "a,b\nx,1\ny,2\n", "", "header 1: A a text; B b number;\n2: \"x\" 1\n3: \"y\" 2", "UTF-8"},
	} {
		t.Run(c.name, func(t *testing.T) {
			table := read(t, c.bytes, readers.Options{Encoding: c.option})
			same(t, show(table), c.want)
			if got := table.Reading.Encoding; got != c.encoding {
				t.Errorf("encoding %q, want %q", got, c.encoding)
			}
		})
	}
}

// A sequence of two bytes that lies across the blocks in which a file is read is
// one character, wherever the blocks end.
func TestBlocksDoNotCutCharacters(t *testing.T) {
	for pad := range 9 {
		text := "a,b\n" + strings.Repeat("x", pad) + strings.Repeat("é𝔉,1\n", 30_000)
		table := read(t, text, readers.Options{})
		if got := table.Reading.Encoding; got != "UTF-8" {
			t.Fatalf("with %d bytes before, the encoding is %s", pad, got)
		}
		if names, _ := table.Columns[0].Levels(); len(names) != min(pad, 1)+1 {
			t.Fatalf("with %d bytes before, there are %d labels", pad, len(names))
		}
	}
	// What one block tells of the encoding holds in the next.
	mixed := "a,b\n" + strings.Repeat("é𝔉,1\n", 30_000) + strings.Repeat("x,1\n", 150_000) + "\xe9,2\n"
	if got, want := refused(t, "kelp.csv", mixed, readers.Options{}).Error(), "kelp.csv:180002: is not UTF-8, while other lines are: save the file in one encoding, or name it with --encoding"; got != want {
		t.Errorf("got:\n%s\nwant:\n%s", got, want)
	}
	big := "\xff\xfe" + utf16Bytes("a,b\n"+strings.Repeat("é𝔉,1\n", 30_000), false)
	if names, _ := read(t, big, readers.Options{}).Columns[0].Levels(); len(names) != 1 {
		t.Fatalf("in UTF-16 there are %d labels", len(names))
	}
}
