# The program alone on an empty base: static, non-root, no shell, nothing writable needed.
#   docker build -t kinegate .
#   docker run --read-only --cap-drop ALL kinegate --help
# Where no image can be pulled, `.ci/image --local` makes the builder from the Go on the machine.
# The server opens no outgoing connections and verifies clients by its own files, so the image
# carries no CA bundle and no time zones.
ARG BUILDER=golang:1.26
FROM ${BUILDER} AS build
WORKDIR /src
# Exec form throughout: a builder needs the Go toolchain, not a shell.
COPY go.mod go.sum ./
RUN ["go", "mod", "download"]
COPY proto proto
COPY kinematics kinematics
COPY clients/go clients/go
COPY service service
ENV CGO_ENABLED=0
# The same source and toolchain give the same bytes in any folder.
RUN ["go", "build", "-trimpath", "-buildvcs=false", "-ldflags=-s -w -buildid=", "-o", "/out/kinegate", "./service/cmd/kinegate"]

FROM scratch
COPY --from=build /out/kinegate /kinegate
# A number, not a name: without /etc/passwd only a number can be checked to be no root.
USER 65532:65532
# Judge streams, other rpcs, plaintext health, metrics over HTTP. All four listen on loopback until
# their addresses are set; beyond it the rpc listeners want TLS.
EXPOSE 8470 8471 8472 8473
# For engines that have no probe of their own; Kubernetes asks the health port itself.
HEALTHCHECK --interval=10s --timeout=3s CMD ["/kinegate", "health"]
ENTRYPOINT ["/kinegate"]
