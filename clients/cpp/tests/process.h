// A server of its own for a test, which can be killed, frozen and started again at the same place.
#pragma once

#include <sys/types.h>

#include <string>
#include <vector>

namespace kinegate::testing {

// Folder is a folder of its own with a short path, as sockets need, removed at the end.
class Folder {
 public:
  Folder();
  ~Folder();
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  std::string operator/(const std::string& name) const { return path_ + "/" + name; }

 private:
  std::string path_;
};

// Process is a child process that ends with this object.
class Process {
 public:
  Process() = default;
  ~Process();
  Process(const Process&) = delete;
  Process& operator=(const Process&) = delete;

  // Start runs a command, with its standard output and error in a file.
  void Start(const std::vector<std::string>& command, const std::string& log);
  // Signal sends a signal.
  void Signal(int signal) const;
  // Wait waits for the end and returns the exit code, 128 and more after a signal.
  int Wait();

 private:
  pid_t pid_ = 0;
};

// Program is the program that a variable of the environment names; the test fails without.
std::string Program(const char* variable);

// FreePort is a TCP port of the loopback that nothing listens at.
int FreePort();

// Run runs a shell command and says whether it went well.
bool Run(const std::string& command);

// Server is `kinegate serve` with its gate at an address.
class Server {
 public:
  // `where` is the address of the gate, on a unix socket where empty; `more` are further flags;
  // `before` is a command that the program runs under, such as "ip netns exec NAME".
  explicit Server(std::string where = "", std::vector<std::string> more = {},
                  std::vector<std::string> before = {});

  // address is that of the gate, as clients dial it.
  const std::string& address() const { return address_; }
  // Start starts it and returns when the gate is open.
  void Start();
  // Kill ends it as a crash does.
  void Kill();
  // Leave drains it and waits for its end.
  void Leave();
  // Freeze stops it without a sign; Thaw lets it go on.
  void Freeze() const;
  void Thaw() const;

 private:
  Folder folder_;
  std::string address_;
  std::vector<std::string> command_;
  int starts_ = 0;
  Process process_;
};

}  // namespace kinegate::testing
