package mesh

import (
	"fmt"
	"math"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// neutral is the material of what no library describes, and the start of each that one does: a matt grey.
func neutral() model.Material {
	return model.Material{
		Kind: model.BlinnPhong, Diffuse: tint.Grey(0.5), Ambient: tint.Grey(0.5), Shininess: 30, Opacity: 1,
	}
}

// readMTL adds the materials of an MTL library to into. Of a name that is there already the first description counts, as the format
// has it for libraries searched in order.
//
// Source: the MTL material format of the Alias/Wavefront Object files (version 4.2, 1995). Read are newmtl, Kd, Ks, Ka and Ke
// (one value, or three: linear Rec. 709; Ke in nit), Ns (the exponent), d (opacity, "-halo" has no effect) and Tr (1 - d; d counts
// where both stand). Where Ka is missing it is Kd. Other statements are skipped, texture maps and illumination models among them.
func readMTL(file string, data []byte, into map[string]model.Material) error {
	lines, err := newLineReader(file, data)
	if err != nil {
		return err
	}
	var m mtlMaterial
	for {
		keyword, rest, ok := lines.next()
		if !ok {
			break
		}
		if string(keyword) == "newmtl" {
			m.finish(into)
			m = mtlMaterial{open: true, name: string(rest), Material: neutral()}
			continue
		}
		if err := m.statement(string(keyword), rest); err != nil {
			return &PosError{file, lines.line, fmt.Errorf("%s: %w", keyword, err)}
		}
	}
	m.finish(into)
	return nil
}

// mtlMaterial is a material being read.
type mtlMaterial struct {
	model.Material
	name                string
	open                bool // a newmtl has been read
	hasAmbient, hasDKey bool
}

// finish stores the material.
func (m *mtlMaterial) finish(into map[string]model.Material) {
	if !m.open {
		return
	}
	if !m.hasAmbient {
		m.Ambient = m.Diffuse
	}
	if _, ok := into[m.name]; !ok {
		into[m.name] = m.Material
	}
}

// statement takes one statement other than newmtl.
func (m *mtlMaterial) statement(keyword string, rest []byte) (err error) {
	switch keyword {
	case "Kd", "Ks", "Ka", "Ke", "Ns", "d", "Tr":
		if !m.open {
			return fmt.Errorf("it stands before the first newmtl")
		}
	}
	switch keyword {
	case "Kd":
		m.Diffuse, err = mtlColor(rest, 1)
	case "Ks":
		m.Specular, err = mtlColor(rest, 1)
	case "Ka":
		m.hasAmbient = true
		m.Ambient, err = mtlColor(rest, 1)
	case "Ke":
		m.Emission, err = mtlColor(rest, math.MaxFloat32)
	case "Ns":
		m.Shininess, err = mtlNumber(rest)
		if err == nil && (m.Shininess < 0 || m.Shininess > 100_000) {
			err = fmt.Errorf("the exponent must be 0 to 100000, got %v", m.Shininess)
		}
	case "d":
		if word, after := field(rest); string(word) == "-halo" {
			rest = after
		}
		m.hasDKey = true
		m.Opacity, err = mtlNumber(rest)
		if err == nil && !(m.Opacity > 0 && m.Opacity <= 1) {
			err = fmt.Errorf("the opacity must be > 0 and at most 1, got %v", m.Opacity)
		}
	case "Tr":
		if m.hasDKey {
			return nil
		}
		var t float64
		t, err = mtlNumber(rest)
		if err == nil && !(t >= 0 && t < 1) {
			err = fmt.Errorf("the transparency (1 - d) must be at least 0 and < 1, got %v", t)
		}
		m.Opacity = 1 - t
	}
	return err
}

// mtlColor reads three linear values, or one for all three, of 0 to most.
func mtlColor(rest []byte, most float64) (tint.RGB, error) {
	if word, _ := field(rest); string(word) == "spectral" || string(word) == "xyz" {
		return tint.RGB{}, fmt.Errorf("colours given as %q are not read: one or three linear values are accepted", word)
	}
	var v [3]float64
	n, err := numbers(rest, v[:])
	switch {
	case err != nil:
		return tint.RGB{}, err
	case n == 1:
		v[1], v[2] = v[0], v[0]
	case n != 3:
		return tint.RGB{}, fmt.Errorf("one or three values are needed, got %d", n)
	}
	for _, c := range v {
		if !(c >= 0 && c <= most) {
			return tint.RGB{}, fmt.Errorf("values must be 0 to %v, got %v", most, c)
		}
	}
	return tint.RGB{R: float32(v[0]), G: float32(v[1]), B: float32(v[2])}, nil
}

// mtlNumber reads one number.
func mtlNumber(rest []byte) (float64, error) {
	var v [1]float64
	n, err := numbers(rest, v[:])
	if err == nil && n == 0 {
		err = fmt.Errorf("a number is missing")
	}
	return v[0], err
}
