package fieldsheets

import (
	"fmt"
	"html/template"
	"io"
	"strings"
	"unicode"

	"git.sr.ht/~sbinet/gg"
	"golang.org/x/image/font"
	"golang.org/x/image/font/gofont/gobold"
	"golang.org/x/image/font/gofont/goregular"
	"golang.org/x/image/font/opentype"

	"tautbook/tension"
)

// Picture is one drawing of a cable that can stand in a file of its own.
type Picture struct {
	Name string // for a file, without an ending: letters, digits and dashes
	svg  *svg
}

// Pictures are the drawings of a cable: today against expected, true shape with support forces, below the chord, residuals. A cable
// without a drawing has none.
func Pictures(a *tension.Assessment) (out []Picture) {
	if !(a.Drawing.To > a.Drawing.From) {
		return nil
	}
	d := drawingsOf(a)
	for _, p := range []struct {
		what string
		svg  *svg
	}{{"ratio", d.scale}, {"shape", d.shape}, {"below-chord", d.below}, {"residuals", d.residuals}} {
		if p.svg != nil {
			out = append(out, Picture{fileName(name(a)) + "-" + p.what, p.svg})
		}
	}
	return out
}

// fileName makes text from a file safe as the name of one.
func fileName(s string) string {
	s = strings.Map(func(r rune) rune {
		if unicode.IsLetter(r) || unicode.IsDigit(r) || r == '-' || r == '_' {
			return r
		}
		return '-'
	}, s)
	if runes := []rune(s); len(runes) > 60 {
		s = string(runes[:60])
	}
	return s
}

// WriteSVG prints the picture as a file of its own, styled as on paper.
func (p Picture) WriteSVG(w io.Writer) error {
	var style strings.Builder
	for _, m := range p.svg.marks {
		k, known := looks[m.class]
		rule := "." + strings.ReplaceAll(m.class, " ", ".") + "{" + k.css() + "}"
		if known && !strings.Contains(style.String(), rule) {
			style.WriteString(rule)
		}
	}
	text := string(p.svg.markup("p"))
	text = strings.Replace(text, "<svg ", fmt.Sprintf(`<svg xmlns="http://www.w3.org/2000/svg" width="%.0f" height="%.0f" `, p.svg.w, p.svg.h), 1)
	text = strings.Replace(text, "</title>", "</title><style>text{font-family:sans-serif}"+template.HTMLEscapeString(style.String())+`</style><rect width="100%" height="100%" fill="#fff"/>`, 1)
	_, err := io.WriteString(w, text+"\n")
	return err
}

// css is the look as a rule of a style sheet.
func (k look) css() string {
	var b strings.Builder
	hex := func(c ink) string {
		if !c.drawn {
			return "none"
		}
		return fmt.Sprintf("#%02x%02x%02x", c.r, c.g, c.b)
	}
	fmt.Fprintf(&b, "fill:%s;stroke:%s;stroke-width:%g", hex(k.fill), hex(k.stroke), k.width)
	if k.dash != nil {
		fmt.Fprintf(&b, ";stroke-dasharray:%s", strings.Trim(fmt.Sprint(k.dash), "[]"))
	}
	if k.size > 0 {
		fmt.Fprintf(&b, ";font-size:%gpx", k.size)
	}
	if k.bold {
		b.WriteString(";font-weight:600")
	}
	return b.String()
}

// sharpness is the number of pixels to one unit of a picture: 760 units come out 1520 pixels wide.
const sharpness = 2

// WritePNG prints the picture as pixels on white.
func (p Picture) WritePNG(w io.Writer) error {
	c := gg.NewContext(int(p.svg.w*sharpness), int(p.svg.h*sharpness))
	c.SetRGB(1, 1, 1)
	c.Clear()
	c.Scale(sharpness, sharpness)
	for _, m := range p.svg.marks {
		k := looks[m.class]
		if m.text != "" {
			if err := pngText(c, m, k); err != nil {
				return err
			}
			continue
		}
		switch {
		case m.radius > 0:
			c.DrawCircle(m.points[0][0], m.points[0][1], m.radius)
		default:
			c.NewSubPath()
			for _, q := range m.points {
				c.LineTo(q[0], q[1])
			}
			if m.closed {
				c.ClosePath()
			}
		}
		if k.fill.drawn {
			c.SetRGB255(k.fill.r, k.fill.g, k.fill.b)
			c.FillPreserve()
		}
		if k.stroke.drawn {
			c.SetRGB255(k.stroke.r, k.stroke.g, k.stroke.b)
			c.SetLineWidth(k.width * sharpness)
			dash := make([]float64, len(k.dash))
			for i, v := range k.dash {
				dash[i] = v * sharpness
			}
			c.SetDash(dash...)
			c.StrokePreserve()
		}
		c.ClearPath()
	}
	return c.EncodePNG(w)
}

// pngText writes one text; its size is in pixels, for the scale of the context does not reach fonts.
func pngText(c *gg.Context, m mark, k look) error {
	ttf := goregular.TTF
	if k.bold {
		ttf = gobold.TTF
	}
	parsed, err := opentype.Parse(ttf)
	if err != nil {
		return fmt.Errorf("cannot read the font of the picture: %w", err)
	}
	face, err := opentype.NewFace(parsed, &opentype.FaceOptions{Size: k.size * sharpness, DPI: 72, Hinting: font.HintingNone})
	if err != nil {
		return fmt.Errorf("cannot read the font of the picture: %w", err)
	}
	c.Push()
	defer c.Pop()
	c.Identity()
	c.SetFontFace(face)
	c.SetRGB255(k.fill.r, k.fill.g, k.fill.b)
	x := m.points[0][0] * sharpness
	switch wide, _ := c.MeasureString(m.text); m.anchor {
	case "middle":
		x -= wide / 2
	case "end":
		x -= wide
	}
	c.DrawString(m.text, x, m.points[0][1]*sharpness)
	return nil
}
