package main

import (
	"fmt"
	"os"
	"path/filepath"
)

// replacement is a file laid beside the place it is meant for. It is put there by a rename, so that a reader
// sees the old bytes or the new ones.
type replacement struct {
	name, temporary string
	content         []byte // of what is no regular file, such as a pipe, and is written to directly
}

// lay writes the bytes of a replacement. A link is followed.
func lay(name string, content []byte) (*replacement, error) {
	if real, err := filepath.EvalSymlinks(name); err == nil {
		name = real
		info, err := os.Stat(name)
		switch {
		case err != nil:
			return nil, err
		case info.IsDir():
			return nil, fmt.Errorf("%s is a folder; expected the name of a file to write", name)
		case !info.Mode().IsRegular():
			return &replacement{name: name, content: content}, nil
		}
	}
	temporary := filepath.Join(filepath.Dir(name), fmt.Sprintf(".%s.%d.part", filepath.Base(name), os.Getpid()))
	f, err := os.OpenFile(temporary, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return nil, fmt.Errorf("%s cannot be written: %w", name, err)
	}
	r := &replacement{name: name, temporary: temporary}
	_, err = f.Write(content)
	if closed := f.Close(); err == nil {
		err = closed
	}
	if err != nil {
		r.drop()
		return nil, fmt.Errorf("%s cannot be written: %w", name, err)
	}
	return r, nil
}

// put moves the replacement to its place.
func (r *replacement) put() error {
	if r.temporary == "" {
		return os.WriteFile(r.name, r.content, 0o666)
	}
	if err := os.Rename(r.temporary, r.name); err != nil {
		return err
	}
	r.temporary = ""
	r.content = nil
	return nil
}

// drop removes what was laid and not put.
func (r *replacement) drop() {
	if r.temporary != "" {
		os.Remove(r.temporary)
	}
}

// replaceFile writes a file in one step.
func replaceFile(name string, content []byte) error {
	r, err := lay(name, content)
	if err != nil {
		return err
	}
	defer r.drop()
	return r.put()
}

// spare refuses to write over what is read: each output is held against each input, links followed.
func spare(outputs, inputs []string) error {
	for _, o := range outputs {
		there, err := os.Stat(o)
		if err != nil || !there.Mode().IsRegular() {
			continue
		}
		for _, in := range inputs {
			if info, err := os.Stat(in); err == nil && os.SameFile(there, info) {
				return fmt.Errorf("%s is read as an input; expected another file to write to", o)
			}
		}
	}
	return nil
}
