package fit

import (
	"fmt"
	"math"
	"strconv"
)

// dual is a number with its derivatives by up to 11 parameters: forward differentiation, exact to rounding.
type dual struct {
	v float64
	d [11]float64
}

// chain applies a function with value v and derivative dv.
func (a dual) chain(v, dv float64) dual {
	r := dual{v: v}
	for i, d := range a.d {
		r.d[i] = dv * d
	}
	return r
}

func (a dual) plus(b dual, s float64) dual {
	r := dual{v: a.v + s*b.v}
	for i := range r.d {
		r.d[i] = a.d[i] + s*b.d[i]
	}
	return r
}

func (a dual) times(b dual) dual {
	r := dual{v: a.v * b.v}
	for i := range r.d {
		r.d[i] = a.d[i]*b.v + a.v*b.d[i]
	}
	return r
}

func (a dual) over(b dual) dual { return a.times(b.chain(1/b.v, -1/(b.v*b.v))) }

func (a dual) pow(b dual) dual {
	if b.d == ([11]float64{}) {
		return a.chain(math.Pow(a.v, b.v), b.v*math.Pow(a.v, b.v-1))
	}
	p := math.Pow(a.v, b.v)
	r := a.chain(p, b.v*math.Pow(a.v, b.v-1))
	for i := range r.d {
		r.d[i] += p * math.Log(a.v) * b.d[i]
	}
	return r
}

// formula evaluates the model strings of the StRD files by recursive descent: + - * / ** ( ) exp cos sin atan pi.
type formula struct {
	text string
	at   int
	vars map[string]dual
}

func evaluate(text string, vars map[string]dual) (r dual, err error) {
	f := &formula{text: text, vars: vars}
	defer func() {
		if e := recover(); e != nil {
			err = fmt.Errorf("%q at %d: %v", text, f.at, e)
		}
	}()
	r = f.sum()
	if f.at != len(text) {
		panic("trailing text")
	}
	return r, nil
}

func (f *formula) take(s string) bool {
	if len(f.text)-f.at < len(s) || f.text[f.at:f.at+len(s)] != s || (s == "*" && f.at+1 < len(f.text) && f.text[f.at+1] == '*') {
		return false
	}
	f.at += len(s)
	return true
}

func (f *formula) sum() dual {
	r := f.product()
	for {
		switch {
		case f.take("+"):
			r = r.plus(f.product(), 1)
		case f.take("-"):
			r = r.plus(f.product(), -1)
		default:
			return r
		}
	}
}

func (f *formula) product() dual {
	r := f.sign()
	for {
		switch {
		case f.take("*"):
			r = r.times(f.sign())
		case f.take("/"):
			r = r.over(f.sign())
		default:
			return r
		}
	}
}

func (f *formula) sign() dual {
	if f.take("-") {
		return dual{}.plus(f.sign(), -1)
	}
	base := f.atom()
	if f.take("**") {
		return base.pow(f.sign())
	}
	return base
}

func (f *formula) atom() dual {
	if f.take("(") {
		r := f.sum()
		if !f.take(")") {
			panic("missing )")
		}
		return r
	}
	start := f.at
	for f.at < len(f.text) && (f.text[f.at] == '.' || f.text[f.at] >= '0' && f.text[f.at] <= '9' || f.text[f.at] >= 'a' && f.text[f.at] <= 'z') {
		f.at++
	}
	word := f.text[start:f.at]
	if v, err := strconv.ParseFloat(word, 64); err == nil {
		return dual{v: v}
	}
	if word == "pi" {
		return dual{v: math.Pi}
	}
	if v, ok := f.vars[word]; ok {
		return v
	}
	if !f.take("(") {
		panic("unknown name " + word)
	}
	a := f.sum()
	if !f.take(")") {
		panic("missing )")
	}
	switch word {
	case "exp":
		return a.chain(math.Exp(a.v), math.Exp(a.v))
	case "cos":
		return a.chain(math.Cos(a.v), -math.Sin(a.v))
	case "sin":
		return a.chain(math.Sin(a.v), math.Cos(a.v))
	case "atan":
		return a.chain(math.Atan(a.v), 1/(1+a.v*a.v))
	}
	panic("unknown function " + word)
}
