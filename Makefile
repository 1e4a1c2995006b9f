# Quietbus. On a fresh Debian or Ubuntu machine Go and make are enough:
#
#   make run     install what is missing and open the demo study; without a
#                display write the demo's handout to ./demo-handout
#   make test    install what is missing and run every check
#
#   make build   ./quietbus
#   make bench   the speed figures
#   make shots   pictures of the window, in ./shots

SHELL := /bin/bash
GO ?= go
# No version stamp from a repository: it needs a git that may not be there.
BUILD := -buildvcs=false
DEMO := testdata/demo.study.json

.NOTPARALLEL:
.PHONY: run test build bench shots demo-handout go-here packages test-packages first-build fmt vet unit race window

ifeq ($(DISPLAY),)
run: demo-handout
else
run: build
	./quietbus $(DEMO)
endif

# A build without the window: no C compiler, no graphics packages.
demo-handout: go-here
	@echo "quietbus: there is no display here, so the demo's handout is written instead of opening the window"
	@.ci/packages handout
	$(GO) build $(BUILD) -tags headless -o .build/quietbus ./app
	@.build/quietbus handout $(DEMO) -o demo-handout; rc=$$?; [ $$rc -le 1 ] || exit $$rc
	@echo "quietbus: the handout is in $(CURDIR)/demo-handout; begin with handout.pdf"

build: packages first-build
	$(GO) build $(BUILD) -o quietbus ./app

test: test-packages fmt first-build vet unit race window
	@echo "quietbus: all checks passed"

go-here:
	@command -v $(GO) >/dev/null || { echo "quietbus: Go is missing; install Go 1.26 or newer (https://go.dev/dl) and start again" >&2; exit 1; }

packages: go-here
	@.ci/packages run

test-packages: go-here
	@.ci/packages test

# The toolkit's OpenGL package is large C code; everything else is quick.
first-build:
	@[ -d "$$($(GO) env GOMODCACHE)/fyne.io" ] || echo "quietbus: fetching the Go modules"
	@if [ "$$($(GO) list $(BUILD) -f '{{.Stale}}' fyne.io/fyne/v2/app 2>/dev/null)" != false ]; then \
	  echo "quietbus: the first build of the graphics library takes some minutes (over three on two cores); later ones are quick"; fi

fmt:
	@bad=$$("$$($(GO) env GOROOT)/bin/gofmt" -l app assets study widgets testdata) || exit 1; \
	  [ -z "$$bad" ] || { echo "quietbus: gofmt these files:" >&2; echo "$$bad" >&2; exit 1; }

vet:
	$(GO) vet $(BUILD) ./...
	$(GO) vet $(BUILD) -tags headless ./app

unit:
	$(GO) test $(BUILD) ./...

# What works on several goroutines, without the toolkit.
race:
	$(GO) test $(BUILD) -race -tags headless -run Race ./app

# A true window under a virtual display, driven by mouse and keyboard.
window:
	QUIETBUS_WINDOW_TEST=1 LANG=C $(GO) test $(BUILD) -count=1 -run TrueWindow -v ./app

bench: packages first-build
	$(GO) test $(BUILD) -run '^$$' -bench . -benchmem ./study/... ./widgets/... ./app | tee bench.txt

shots: test-packages first-build
	QUIETBUS_SHOTS=$(CURDIR)/shots QUIETBUS_WINDOW_TEST=1 LANG=C $(GO) test $(BUILD) -count=1 -run TrueWindow ./app
	@ls shots/*.png
