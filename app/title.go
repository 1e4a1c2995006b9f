//go:build !headless

package main

import (
	"fmt"
	"strconv"
	"time"

	"quietbus/study"
	"quietbus/widgets"
)

// editTitle opens the sheet of the title block and the study's own values.
func (w *Window) editTitle() {
	s := w.project.Study()
	title, frequency, order := s.Title, s.FrequencyHz, s.Order()
	texts := map[string]*string{"study": &title.Study, "client": &title.Client, "site": &title.Site, "author": &title.Author,
		"revision": &title.Revision, "date": &title.Date, "remarks": &title.Remarks}

	sheet := widgets.NewSheet("Title block and settings")
	sheet.Fields = func() []widgets.SheetField {
		var out []widgets.SheetField
		for _, f := range study.DescribeTitle() {
			if text, ok := texts[f.Key]; ok {
				out = append(out, fieldOf(f, *text))
			} else if f.Key == "invented" {
				out = append(out, fieldOf(f, fmt.Sprint(title.Invented)))
			}
		}
		for _, f := range study.DescribeStudy() {
			field := fieldOf(f, strconv.Itoa(order))
			if f.Key == "frequencyHz" {
				field.Text = strconv.FormatFloat(frequency, 'g', -1, 64)
			}
			field.Sourced = false
			out = append(out, field)
		}
		return out
	}
	sheet.Check = func(key, text string) (problem, remedy string) {
		for _, f := range study.DescribeTitle() {
			if f.Key == key && f.Need && text == "" {
				return "is empty", "say in one line what is studied"
			}
		}
		for _, f := range study.DescribeStudy() {
			if f.Key == key && text != "" {
				return checkNumber(f, text)
			}
		}
		return "", ""
	}
	sheet.OnChanged = func(key, text, problem string) {
		if problem != "" {
			return
		}
		switch key {
		case "frequencyHz":
			frequency, _ = study.ParseNumber(text)
		case "maxOrder":
			v, _ := study.ParseNumber(text)
			order = int(v)
		case "invented":
			title.Invented = text == "true"
		default:
			if at := texts[key]; at != nil {
				*at = text
			}
		}
	}
	w.sheet(sheet, "Title block and settings", func() {
		w.do("Edit the title block", func(s *study.Study) error {
			s.Title, s.FrequencyHz = title, frequency
			if order != s.Order() {
				s.MaxOrder = order
			}
			return nil
		})
	})
}

// checkNumber checks a number against a field's bounds.
func checkNumber(f study.Field, text string) (problem, remedy string) {
	v, err := study.ParseNumber(text)
	if err != nil {
		return err.Error(), "type a number"
	}
	if !f.Range.Holds(v) || f.Type == study.Whole && v != float64(int(v)) {
		return "is out of range", "give a value " + f.Range.String()
	}
	return "", ""
}

// sheet shows a sheet in the window; apply runs when every field passes.
func (w *Window) sheet(s *widgets.Sheet, title string, apply func()) {
	pop := w.modal(s, 640, 150+58*float32(len(s.Fields())))
	done := func() {
		pop.Hide()
		w.dialog = ""
	}
	s.OnCancel = done
	s.OnApply = func() {
		done()
		apply()
	}
	s.Reload()
	pop.Show()
	w.dialog = title
	w.report()
	go func() { // a field takes the focus only once it has been painted
		time.Sleep(80 * time.Millisecond)
		w.post(func() {
			if pop.Visible() {
				s.FocusField("")
			}
		})
	}()
}

// An answer is one field of the New study sheet: a field of an item as the
// study describes it, with the value to start from.
type answer struct {
	key, label, text string
	kind             study.Kind
	field            string
}

// answers are the five questions: frequency, supply, transformer, main loads,
// limit set.
var answers = []answer{
	{key: "title", label: "Study", text: "New study"},
	{key: "frequency", label: "System frequency", text: "50"},
	{"kv", "Supply voltage", "11", study.KindBus, "nominalKV"},
	{"fault", "Fault level of the supply", "250", study.KindSupply, "faultMVA"},
	{"kva", "Transformer", "1000", study.KindTransformer, "ratedKVA"},
	{"lv", "Low voltage", "0.4", study.KindTransformer, "lvKV"},
	{"drives", "Non-linear loads on the low-voltage board", "200", study.KindNonlinearLoad, "kW"},
	{"spectrum", "Their spectrum", "six-pulse-3pct", study.KindNonlinearLoad, "spectrum"},
	{"linear", "Other loads on the board", "200", study.KindLoad, "kW"},
	{"set", "Limit set", "iec61000-2-4-class2", study.KindAssessment, "set"},
}

// newStudy asks the five questions and opens a study that can be solved.
func (w *Window) newStudy() {
	w.guard(func() {
		given := map[string]string{}
		for _, a := range answers {
			given[a.key] = a.text
		}
		sheet := widgets.NewSheet("New study")
		sheet.Fields = func() []widgets.SheetField {
			var out []widgets.SheetField
			for _, a := range answers {
				out = append(out, a.sheetField(given[a.key]))
			}
			return out
		}
		sheet.Check = func(key, text string) (string, string) {
			for _, a := range answers {
				if a.key == key {
					return a.check(text)
				}
			}
			return "", ""
		}
		sheet.OnChanged = func(key, text, problem string) {
			for _, a := range answers {
				if a.key == key && problem == "" {
					given[key] = wordOf(a.kind, a.field, text)
				}
			}
		}
		w.sheet(sheet, "New study", func() { w.adopt(NewProject(fromAnswers(given))) })
	})
}

// describe returns the description of the field behind an answer.
func (a answer) describe() study.Field {
	if a.kind != "" {
		if f := study.FieldOf(a.kind, a.field); f != nil {
			return *f
		}
	}
	if a.key == "frequency" {
		return study.DescribeStudy()[0]
	}
	return study.Field{Need: true, Help: "What is studied, in one line."}
}

func (a answer) sheetField(text string) widgets.SheetField {
	f := fieldOf(a.describe(), text)
	f.Key, f.Label, f.Sourced, f.Default = a.key, a.label, false, ""
	if named := titles(a.kind, a.field); named != nil {
		f.Kind, f.Choices, f.Text = widgets.FieldChoice, named, titleOf(a.kind, a.field, text)
	}
	switch a.key {
	case "drives", "linear":
		f.Help, f.Default = "Active power in kW; leave empty for none.", "none"
	}
	return f
}

func (a answer) check(text string) (problem, remedy string) {
	f := a.describe()
	optional := a.key == "drives" || a.key == "linear"
	switch {
	case text == "" && optional:
		return "", ""
	case text == "":
		return "is empty", "fill it in"
	case f.Type == study.Number:
		return checkNumber(f, text)
	}
	return "", ""
}

// fromAnswers builds the study. What was not asked gets typical values, each
// marked as assumed.
func fromAnswers(given map[string]string) *study.Study {
	number := func(key string) float64 {
		v, _ := study.ParseNumber(given[key])
		return v
	}
	s := blankStudy()
	s.Title.Study, s.FrequencyHz = given["title"], number("frequency")
	add := func(name string, item any, set func()) {
		set()
		if err := study.SetField(item, "name", name); err == nil {
			s.Add(item)
		}
	}
	stated := func(item any, keys ...string) {
		for _, key := range keys {
			study.SetProvenance(item, key, study.Provenance{})
		}
	}
	pcc, board := study.NewItem(study.KindBus).(*study.Bus), study.NewItem(study.KindBus).(*study.Bus)
	add("PCC", pcc, func() { pcc.NominalKV = number("kv") })
	add("Main board", board, func() { board.NominalKV = number("lv") })
	supply := study.NewItem(study.KindSupply).(*study.Supply)
	add("Supply", supply, func() {
		supply.Bus, supply.FaultMVA = "PCC", number("fault")
		stated(supply, "faultMVA")
	})
	t := study.NewItem(study.KindTransformer).(*study.Transformer)
	add("T1", t, func() {
		kva := number("kva")
		t.LoadLossKW *= kva / t.RatedKVA // keeps the typical X/R
		t.HVBus, t.LVBus, t.RatedKVA, t.HVKV, t.LVKV = "PCC", "Main board", kva, number("kv"), number("lv")
		stated(t, "ratedKVA", "hvKV", "lvKV")
	})
	if kw := number("drives"); kw > 0 {
		l := study.NewItem(study.KindNonlinearLoad).(*study.NonlinearLoad)
		add("Drives", l, func() {
			l.Bus, l.KW, l.Spectrum = "Main board", kw, given["spectrum"]
			stated(l, "kW")
		})
	}
	if kw := number("linear"); kw > 0 {
		l := study.NewItem(study.KindLoad).(*study.Load)
		add("Other loads", l, func() {
			l.Kvar *= kw / l.KW // keeps the typical power factor
			l.Bus, l.KW = "Main board", kw
			stated(l, "kW")
		})
	}
	point := study.NewItem(study.KindAssessment).(*study.Assessment)
	add("Main board limits", point, func() { point.Bus, point.Set = "Main board", given["set"] })
	return s
}
