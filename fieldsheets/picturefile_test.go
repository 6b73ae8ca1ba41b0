package fieldsheets

import (
	"bytes"
	"encoding/xml"
	"errors"
	"image/png"
	"io"
	"strings"
	"testing"
)

// Every class that a picture uses has a look on paper: a mark without one would be drawn as nothing.
func TestEveryMarkHasALook(t *testing.T) {
	r := sampleReport()
	seen := map[string]bool{}
	for i := range r.Cables {
		for _, p := range Pictures(&r.Cables[i]) {
			for _, m := range p.svg.marks {
				seen[m.class] = true
				if _, ok := looks[m.class]; !ok {
					t.Errorf("%s: class %q has no look", p.Name, m.class)
				}
			}
		}
	}
	if len(seen) < 15 {
		t.Errorf("only the classes %v are used", seen)
	}
}

func TestPictureFiles(t *testing.T) {
	r := sampleReport()
	pictures := Pictures(&r.Cables[0])
	if len(pictures) != 4 {
		t.Fatalf("%d pictures", len(pictures))
	}
	for _, p := range pictures {
		var svg, pixels bytes.Buffer
		if err := errors.Join(p.WriteSVG(&svg), p.WritePNG(&pixels)); err != nil {
			t.Fatal(err)
		}
		dec := xml.NewDecoder(strings.NewReader(svg.String()))
		for {
			if _, err := dec.Token(); err == io.EOF {
				break
			} else if err != nil {
				t.Fatalf("%s: not well-formed: %v", p.Name, err)
			}
		}
		img, err := png.Decode(&pixels)
		if err != nil {
			t.Fatal(err)
		}
		size := img.Bounds()
		if size.Dx() != int(p.svg.w*sharpness) {
			t.Errorf("%s: %v", p.Name, size)
		}
		dark := 0
		for y := range size.Dy() {
			for x := range size.Dx() {
				if v, _, _, _ := img.At(x, y).RGBA(); v < 0x8000 {
					dark++
				}
			}
		}
		if share := float64(dark) / float64(size.Dx()*size.Dy()); share < 0.003 || share > 0.3 {
			t.Errorf("%s: %.2f %% of the pixels are dark", p.Name, 100*share)
		}
	}
	golden(t, pictures[0].Name+".svg", func() string {
		var b bytes.Buffer
		if err := pictures[0].WriteSVG(&b); err != nil {
			t.Fatal(err)
		}
		return b.String()
	}())
}

func TestPictureNamesAreSafe(t *testing.T) {
	for text, want := range map[string]string{"main-left": "main-left", "../../etc/x": "------etc-x", "a b\x00": "a-b-", "Čáp": "Čáp"} {
		if got := fileName(text); got != want {
			t.Errorf("%q becomes %q, want %q", text, got, want)
		}
	}
}
