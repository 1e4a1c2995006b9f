package main

import (
	"quietbus/study"
	"quietbus/study/converter"
	"quietbus/study/limits"
)

// A wording pairs a word of the study file with what the screen calls it.
type wording struct{ word, title string }

// wordings returns the words of a field that the screen calls otherwise, in the
// order in which they are offered; nil for a field that is shown as it is.
func wordings(kind study.Kind, key string) []wording {
	var out []wording
	switch {
	case kind == study.KindNonlinearLoad && key == "spectrum":
		for _, m := range converter.Typical() {
			out = append(out, wording{m.Name, m.Title})
		}
		out = append(out, wording{study.Typed, "Typed below"})
	case kind == study.KindAssessment && key == "set":
		for _, set := range limits.Sets() {
			out = append(out, wording{set.ID, set.Title})
		}
	case kind == study.KindMeasure && key == "kind":
		for _, word := range study.FieldOf(kind, key).Choices {
			out = append(out, wording{word, kindWord(word)})
		}
	}
	return out
}

// titleOf returns what the screen calls a word of a field.
func titleOf(kind study.Kind, key, word string) string {
	for _, w := range wordings(kind, key) {
		if w.word == word {
			return w.title
		}
	}
	return word
}

// wordOf is the inverse of titleOf.
func wordOf(kind study.Kind, key, title string) string {
	for _, w := range wordings(kind, key) {
		if w.title == title {
			return w.word
		}
	}
	return title
}

// titles lists what the screen calls the words of a field.
func titles(kind study.Kind, key string) []string {
	var out []string
	for _, w := range wordings(kind, key) {
		out = append(out, w.title)
	}
	return out
}

// kindWord returns what a kind of measure is called.
func kindWord(kind string) string { return study.KindTitle(kind) }
