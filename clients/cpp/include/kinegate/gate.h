// Where a server is and how to reach it.
#pragma once

#include <grpcpp/channel.h>
#include <grpcpp/security/credentials.h>

#include <memory>
#include <string>

namespace kinegate {

// Tls turns transport security on. An empty file name means none.
struct Tls {
  std::string ca_file;           // PEM authorities to trust; empty: those of the system
  std::string certificate_file;  // PEM certificate of the client, for servers that ask for one
  std::string key_file;          // PEM key of that certificate
  std::string server_name;       // name that the server's certificate must carry, if not the address'
};

// Gate is the address of the listener for judge streams, of one server or of several replicas:
//   "host:port", "ipv4:10.0.0.1:8470,10.0.0.2:8470", "dns:///name:port", "unix:/path".
// Without TLS, servers listen on loopback and unix sockets only.
class Gate {
 public:
  // Plaintext reaches a server on this machine.
  explicit Gate(std::string address);
  // TLS 1.2 or later. Throws Error where a file cannot be read or half of the pair is missing. A
  // program that uses OpenSSL itself before calls OPENSSL_init_crypto(OPENSSL_INIT_NO_ATEXIT, nullptr)
  // first of all, as is done here: threads of the transport may outlive main.
  Gate(std::string address, const Tls& tls);

  // Connect makes a connection of its own, shared with nobody: a dead one must not be waited
  // for, and other traffic must not stand before verdicts.
  std::shared_ptr<grpc::Channel> Connect() const;

  // address is the address as given.
  const std::string& address() const { return address_; }

 private:
  std::string address_;
  std::string server_name_;
  std::shared_ptr<grpc::ChannelCredentials> credentials_;
};

}  // namespace kinegate
