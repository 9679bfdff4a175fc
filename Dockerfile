# Build with the C compiler that SQLite needs, run without it, as nobody.
FROM golang:1.26-bookworm AS build
WORKDIR /src
COPY go.mod go.sum ./
RUN go mod download
COPY . .
RUN CGO_ENABLED=1 go build -trimpath -ldflags="-s -w" -o /spillway ./cmd/spillway \
 && mkdir -p /data

FROM debian:bookworm-slim
COPY --from=build /spillway /usr/local/bin/spillway
COPY --from=build --chown=65532:65532 /data /data
USER 65532:65532
VOLUME /data
EXPOSE 8080
# There are no accounts yet: inside the container the address must be open to
# reach the port at all, so publish it on the host's loopback only, as in
#   docker run -p 127.0.0.1:8080:8080 -v spillway:/data spillway
ENTRYPOINT ["spillway", "serve", "--data", "/data", "--addr", "0.0.0.0:8080", "--expose-to-network"]
