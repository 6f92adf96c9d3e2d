#include "kinegate/gate.h"

#include <grpcpp/create_channel.h>
#include <openssl/crypto.h>

#include <fstream>
#include <sstream>
#include <utility>

#include "kinegate/error.h"

namespace kinegate {
namespace {

// Limits and times of the transport, equal to the server's own.
constexpr int kMessageLimit = 4 << 20;
constexpr int kPingMs = 20'000;  // the server allows a ping every 10 s
constexpr int kPingTimeoutMs = 10'000;
constexpr int kFirstBackoffMs = 100;
constexpr int kConnectMs = 1'000;
constexpr int kLastBackoffMs = 2'000;

// The judge stream is in no retry policy: a transport that replays its frames would judge events
// twice. A stream's first opening waits for a server; a resumption tries another address.
constexpr char kServiceConfig[] = R"({"loadBalancingConfig": [{"round_robin": {}}]})";

std::string Read(const std::string& name) {
  if (name.empty()) return "";
  std::ifstream file(name, std::ios::binary);
  std::ostringstream text;
  if (!file || !(text << file.rdbuf())) {
    throw Error("cannot read " + name, grpc::StatusCode::INVALID_ARGUMENT);
  }
  return text.str();
}

}  // namespace

Gate::Gate(std::string address)
    : address_(std::move(address)), credentials_(grpc::InsecureChannelCredentials()) {}

Gate::Gate(std::string address, const Tls& tls)
    : address_(std::move(address)), server_name_(tls.server_name) {
  if (tls.certificate_file.empty() != tls.key_file.empty()) {
    throw Error("a client certificate needs both certificate_file and key_file",
                grpc::StatusCode::INVALID_ARGUMENT);
  }
  // As a process ends, OpenSSL would free what threads of the transport may still use, such as that
  // of a handshake which was given up; not all of them can be waited for. Said before its first use,
  // this has it leave everything to the system.
  OPENSSL_init_crypto(OPENSSL_INIT_NO_ATEXIT, nullptr);
  grpc::SslCredentialsOptions options;
  options.pem_root_certs = Read(tls.ca_file);
  options.pem_cert_chain = Read(tls.certificate_file);
  options.pem_private_key = Read(tls.key_file);
  credentials_ = grpc::SslCredentials(options);
}

std::shared_ptr<grpc::Channel> Gate::Connect() const {
  grpc::ChannelArguments arguments;
  arguments.SetMaxReceiveMessageSize(kMessageLimit);
  arguments.SetMaxSendMessageSize(kMessageLimit);
  arguments.SetServiceConfigJSON(kServiceConfig);
  arguments.SetInt(GRPC_ARG_USE_LOCAL_SUBCHANNEL_POOL, 1);
  arguments.SetInt(GRPC_ARG_KEEPALIVE_TIME_MS, kPingMs);
  arguments.SetInt(GRPC_ARG_KEEPALIVE_TIMEOUT_MS, kPingTimeoutMs);
  arguments.SetInt(GRPC_ARG_HTTP2_MAX_PINGS_WITHOUT_DATA, 0);
  arguments.SetInt(GRPC_ARG_INITIAL_RECONNECT_BACKOFF_MS, kFirstBackoffMs);
  arguments.SetInt(GRPC_ARG_MIN_RECONNECT_BACKOFF_MS, kConnectMs);
  arguments.SetInt(GRPC_ARG_MAX_RECONNECT_BACKOFF_MS, kLastBackoffMs);
  if (!server_name_.empty()) arguments.SetSslTargetNameOverride(server_name_);
  return grpc::CreateCustomChannel(address_, credentials_, arguments);
}

}  // namespace kinegate
