// One rpc that carries a judge stream, on a connection of its own.
#pragma once

#include <grpcpp/channel.h>
#include <grpcpp/client_context.h>
#include <grpcpp/support/sync_stream.h>

#include <atomic>
#include <chrono>
#include <condition_variable>
#include <functional>
#include <memory>
#include <mutex>
#include <optional>
#include <thread>

#include "kinegate/error.h"
#include "kinegate/gate.h"
#include "kinegate/v1/selection.grpc.pb.h"
#include "queue.h"

namespace kinegate {

// Break is the end of a connection. Where it is passing, another attempt may go better: the
// connection broke, the server was silent, stuck or has left, or said so itself. Whatever else it
// answered would be answered again.
struct Break {
  Error error;
  bool passing;
};

// Link is driven by one thread, which opens it, serves it and leaves it; Cut may be called by any.
// One thread of its own receives and one sends.
//
// A link that was cut is left at once: gRPC ends an rpc only when the bytes that it has begun to
// write are gone, which on a dead connection takes minutes. Its threads then stay behind, hold what
// they need, and touch the stream no more, since the queue knows that they are of an older link.
class Link : public std::enable_shared_from_this<Link> {
 public:
  // Stuck says whether the server is stuck on the link's blocks.
  using Stuck = std::function<std::optional<Error>(Clock::time_point)>;

  Link(const Gate& gate, std::shared_ptr<Queue> queue);
  Link(const Link&) = delete;
  Link& operator=(const Link&) = delete;

  // Open begins a new turn of the queue and opens the rpc for it within a time. A first opening
  // waits for a server to be there; later ones leave an address that does not answer for the next.
  std::optional<Break> Open(v1::JudgeOpen open, std::chrono::milliseconds within, bool first);
  // opened is the server's answer to Open.
  const v1::JudgeOpened& opened() const { return opened_; }
  // Serve carries the stream until the rpc ends or is cut, and returns why.
  Break Serve(std::chrono::milliseconds silence, const Stuck& stuck);
  // Leave ends the rpc, and waits a moment for the threads.
  void Leave();
  // Cut ends the rpc for a reason; the first one counts.
  void Cut(Error why, bool passing);

 private:
  using Stream = grpc::ClientReaderWriter<v1::JudgeRequest, v1::JudgeResponse>;

  void Receive(const v1::JudgeOpen& open);
  std::optional<Break> TakeFrames(bool follow);
  void Send();
  void Over(Break why);
  bool Watch(std::chrono::milliseconds silence, const Stuck& stuck, const std::function<bool()>& until);

  const std::shared_ptr<Queue> queue_;
  const std::shared_ptr<grpc::Channel> channel_;
  const std::unique_ptr<v1::SelectionService::Stub> stub_;
  grpc::ClientContext context_;
  std::unique_ptr<Stream> stream_;
  // Of the queue. Atomic, since Cut may come while Open begins.
  std::atomic<std::int64_t> turn_{0};
  std::atomic<Clock::time_point> last_seen_{};

  std::mutex mutex_;  // guards what follows
  std::condition_variable changed_;
  bool open_ = false;
  v1::JudgeOpened opened_;
  std::optional<Break> over_;
  int running_ = 0;  // threads

  std::thread receiver_, sender_;
};

}  // namespace kinegate
