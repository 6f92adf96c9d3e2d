#include "process.h"

#include <arpa/inet.h>
#include <fcntl.h>
#include <gtest/gtest.h>
#include <netinet/in.h>
#include <signal.h>
#include <sys/socket.h>
#include <sys/wait.h>
#include <unistd.h>

#include <chrono>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <sstream>
#include <stdexcept>
#include <thread>

namespace kinegate::testing {

Folder::Folder() {
  char name[] = "/tmp/gateXXXXXX";
  if (::mkdtemp(name) == nullptr) throw std::runtime_error("no temporary folder");
  path_ = name;
}

Folder::~Folder() {
  std::error_code ignored;
  std::filesystem::remove_all(path_, ignored);
}

Process::~Process() {
  if (pid_ == 0) return;
  Signal(SIGKILL);
  Wait();
}

void Process::Start(const std::vector<std::string>& command, const std::string& log) {
  // Made before the fork: a child of a process with threads may allocate nothing.
  std::vector<char*> arguments;
  for (const std::string& word : command) arguments.push_back(const_cast<char*>(word.c_str()));
  arguments.push_back(nullptr);
  const char* const name = log.c_str();
  pid_ = ::fork();
  if (pid_ < 0) throw std::runtime_error("no child process");
  if (pid_ > 0) return;
  const int out = ::open(name, O_WRONLY | O_CREAT | O_APPEND | O_CLOEXEC, 0600);
  ::dup2(out, STDOUT_FILENO);
  ::dup2(out, STDERR_FILENO);
  ::execvp(arguments[0], arguments.data());
  ::_exit(127);
}

void Process::Signal(int signal) const {
  ::kill(pid_, signal);
}

int Process::Wait() {
  int status = 0;
  ::waitpid(pid_, &status, 0);
  pid_ = 0;
  return WIFEXITED(status) ? WEXITSTATUS(status) : 128 + WTERMSIG(status);
}

std::string Program(const char* variable) {
  const char* value = std::getenv(variable);
  if (value == nullptr) throw std::runtime_error(std::string(variable) + " must name a program");
  return value;
}

int FreePort() {
  const int socket = ::socket(AF_INET, SOCK_STREAM, 0);
  sockaddr_in address{};
  address.sin_family = AF_INET;
  address.sin_addr.s_addr = htonl(INADDR_LOOPBACK);
  socklen_t size = sizeof address;
  if (::bind(socket, reinterpret_cast<sockaddr*>(&address), size) != 0 ||
      ::getsockname(socket, reinterpret_cast<sockaddr*>(&address), &size) != 0) {
    throw std::runtime_error("no free port");
  }
  ::close(socket);
  return ntohs(address.sin_port);
}

bool Run(const std::string& command) {
  return std::system((command + " >/dev/null 2>&1").c_str()) == 0;
}

Server::Server(std::string where, std::vector<std::string> more, std::vector<std::string> before)
    : address_(where.empty() ? "unix:" + (folder_ / "gate") : std::move(where)), command_(std::move(before)) {
  const std::vector<std::string> flags = {Program("KINEGATE"), "serve",
                                          "--gate-address",    address_,
                                          "--general-address", "unix:" + (folder_ / "general"),
                                          "--health-address",  "",
                                          "--metrics-address", "",
                                          "--drain-notice",    "0s"};
  command_.insert(command_.end(), flags.begin(), flags.end());
  command_.insert(command_.end(), more.begin(), more.end());
  Start();
}

void Server::Start() {
  const std::string log = folder_ / ("log" + std::to_string(++starts_));
  process_.Start(command_, log);
  for (int looks = 0; looks < 1000; ++looks) {
    std::ifstream file(log);
    std::ostringstream text;
    text << file.rdbuf();
    if (text.str().find("listening for gate") != std::string::npos) return;
    std::this_thread::sleep_for(std::chrono::milliseconds(10));
  }
  std::ifstream file(log);
  std::ostringstream text;
  text << file.rdbuf();
  throw std::runtime_error("the server did not start: " + text.str());
}

void Server::Kill() {
  process_.Signal(SIGKILL);
  process_.Wait();
}

void Server::Leave() {
  process_.Signal(SIGTERM);
  EXPECT_EQ(process_.Wait(), 0);
}

void Server::Freeze() const {
  process_.Signal(SIGSTOP);
}

void Server::Thaw() const {
  process_.Signal(SIGCONT);
}

}  // namespace kinegate::testing
