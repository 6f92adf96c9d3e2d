# The commands of the house; `make help` lists them. Only `go` is needed for demo and test.
.DEFAULT_GOAL := help
SHELL := bash

FUZZTIME ?= 30s
BENCH ?= .

.PHONY: help
help: ## list these targets
	@awk -F ':.*## ' '/^[a-z-]+:.*## / { printf "%-12s %s\n", $$1, $$2 }' $(MAKEFILE_LIST)

.PHONY: demo
demo: ## show the gate at work on an invented experiment: a server, 40,000 events, verdicts (seconds)
	go run ./service/cmd/kinegate demo

.PHONY: build
build: ## build the program as build/kinegate
	CGO_ENABLED=0 go build -trimpath -o build/kinegate ./service/cmd/kinegate

.PHONY: test
test: ## vet and run every test that needs nothing but Go (no root, no network beyond modules)
	go vet ./...
	go test -timeout 6m ./...

.PHONY: race
race: ## run the tests under the race detector, shuffled (needs a C compiler)
	go test -race -shuffle on -timeout 15m ./...

.PHONY: fuzz
fuzz: ## run every fuzz target for FUZZTIME each (30s)
	.ci/fuzz $(FUZZTIME)

.PHONY: golden
golden: ## compare the golden digests on amd64, amd64-v3 and emulated arm64 (needs qemu-user-static)
	.ci/golden

.PHONY: lint
lint: ## golangci-lint, buf lint, shellcheck, ruff and mypy, pinned and installed on first use
	.ci/lint
	.ci/python lint

.PHONY: generate
generate: ## make the Go code of the protos again, with pinned tools
	.ci/generate

.PHONY: bench
bench: ## measure the promises about speed, as ratios with their limits (BENCHFLAGS="--json --runs 3")
	go run ./service/bench $(BENCHFLAGS)

.PHONY: microbench
microbench: ## run the Go benchmarks (BENCH=pattern)
	go test -run '^$$' -bench '$(BENCH)' -benchmem ./...

.PHONY: image
image: ## build the container image with docker or podman
	.ci/image

.PHONY: ci
ci: ## everything that guards the main branch, as root on a fresh machine
	.ci/run
