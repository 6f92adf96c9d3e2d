#include "kinegate/judge_stream.h"

#include <algorithm>
#include <atomic>
#include <condition_variable>
#include <exception>
#include <mutex>
#include <optional>
#include <random>
#include <string>
#include <thread>
#include <utility>

#include "link.h"
#include "queue.h"

namespace kinegate {

using std::chrono::milliseconds;

namespace {

constexpr milliseconds kFirstBackoff{50};
constexpr milliseconds kLastBackoff{1'000};

// Jitter varies a time by a quarter, so that clients of one server do not return at once.
milliseconds Jitter(milliseconds time, std::mt19937& random) {
  std::uniform_real_distribution<double> factor(0.75, 1.25);
  return milliseconds(static_cast<milliseconds::rep>(static_cast<double>(time.count()) * factor(random)));
}

// Guard calls what the caller of the library gave it, and returns what that threw.
template <typename F>
std::optional<Error> Guard(const std::string& who, const F& call) {
  try {
    call();
    return std::nullopt;
  } catch (const Error& error) {
    return error;
  } catch (const std::exception& error) {
    return Error(who + " threw: " + error.what());
  } catch (...) {
    return Error(who + " threw something that is no std::exception");
  }
}

}  // namespace

v1::SelectionSource Given(v1::Selection selection) {
  v1::SelectionSource source;
  *source.mutable_given() = std::move(selection);
  return source;
}

v1::SelectionSource Named(const std::string& name, const std::string& digest) {
  v1::SelectionSource source;
  source.mutable_named()->set_name(name);
  source.mutable_named()->set_selection_digest(digest);
  return source;
}

// Runner is a stream with its threads: one runs link after link, one runs handlers.
class JudgeStream::Runner {
 public:
  Runner(Gate gate, v1::JudgeOpen open, JudgeOptions options)
      : gate_(std::move(gate)), open_(std::move(open)), options_(std::move(options)), stuck_(options_.stuck) {
    // The credit, and with it the length of the queue, is known after the opening.
    queue_ = std::make_shared<Queue>(open_.first_sequence(), options_.late);
    link_ = std::make_shared<Link>(gate_, queue_);
    if (auto failed = link_->Open(open_, options_.opening, true)) throw Error(failed->error);
    opened_ = link_->opened();
    if (open_.selection().has_named() && !open_.follow()) {
      open_.mutable_selection()->mutable_named()->set_selection_digest(
          opened_.selection().selection_digest());
    }
    const auto credit = std::max<std::int64_t>(opened_.credit().block_count(), 1);
    queue_->SetLimit(
        static_cast<std::size_t>(options_.queue_block_count > 0 ? options_.queue_block_count : 2 * credit));
    run_ = std::thread([this] { Run(); });
    deliver_ = std::thread([this] { Deliver(); });
  }

  ~Runner() {
    Close();
    run_.join();
    deliver_.join();
  }

  Runner(const Runner&) = delete;
  Runner& operator=(const Runner&) = delete;

  void Close() {
    const std::lock_guard lock(mutex_);
    closed_ = true;
    if (link_) link_->Cut(Error("the stream was closed", grpc::StatusCode::CANCELLED), false);
    changed_.notify_all();
  }

  Queue& queue() { return *queue_; }
  const v1::JudgeOpened& opened() const { return opened_; }
  std::int64_t break_count() const { return break_count_; }

 private:
  // Run serves links until the stream is over.
  void Run() {
    while (true) {
      const auto begun = Clock::now();
      const std::int64_t answered = queue_->last_answered();
      const std::shared_ptr<Link> link = current();
      Break end = link->Serve(options_.silence, [this](auto now) { return Stuck(now); });
      if (queue_->last_answered() > answered || Clock::now() - begun > options_.silence) broken_.reset();
      if (queue_->done()) return queue_->End(std::nullopt);
      if (closed() || !end.passing) return queue_->End(std::move(end.error));
      ++break_count_;
      if (auto failed = CallOnBreak(end.error)) return queue_->End(std::move(failed));
      if (auto failed = Resume(std::move(end.error))) return queue_->End(std::move(failed));
    }
  }

  // Resume opens the next link with the first block without a verdict, and returns why it could
  // not.
  std::optional<Error> Resume(Error why) {
    while (true) {
      if (!Pause()) {
        return Error("giving up after " + std::to_string(options_.give_up.count()) + " ms: " + why.what(),
                     why.code());
      }
      const auto link = std::make_shared<Link>(gate_, queue_);
      {
        const std::lock_guard lock(mutex_);
        if (closed_) return Error("the stream was closed", grpc::StatusCode::CANCELLED);
        link_ = link;
      }
      auto failed = link->Open(open_, options_.silence, false);
      if (!failed) {
        const std::string& digest = link->opened().selection().selection_digest();
        if (open_.follow() || digest == opened_.selection().selection_digest()) return std::nullopt;
        link->Leave();
        return Error("after the break the server would judge with another selection, " + digest + ", not " +
                         opened_.selection().selection_digest(),
                     grpc::StatusCode::FAILED_PRECONDITION);
      }
      if (closed() || !failed->passing) return failed->error;
      why = std::move(failed->error);
    }
  }

  // Pause waits before an attempt to come back, not at all before the first; false when it is time
  // to give up.
  bool Pause() {
    if (!broken_) {
      broken_ = Clock::now();
      backoff_ = kFirstBackoff;
      return true;
    }
    if (Clock::now() - *broken_ > options_.give_up) return false;
    std::unique_lock lock(mutex_);
    changed_.wait_for(lock, Jitter(backoff_, random_), [this] { return closed_; });
    backoff_ = std::min(2 * backoff_, kLastBackoff);
    return true;
  }

  std::optional<Error> Stuck(Clock::time_point now) {
    const milliseconds limit = stuck_;
    if (queue_->Stuck(now) <= limit) return std::nullopt;
    stuck_ = 2 * limit;
    return Error("the server is stuck: no verdict for " + std::to_string(limit.count()) + " ms",
                 grpc::StatusCode::UNAVAILABLE);
  }

  // Deliver runs handlers until there are no more answers.
  void Deliver() {
    while (auto answer = queue_->Take()) {
      const auto failed = Guard("a handler", [&] {
        if (answer->handler) answer->handler(std::move(answer->verdicts));
      });
      if (failed) {
        queue_->End(failed);
        Close();
      }
      // Before Finish may return: what the handler holds is the caller's.
      answer.reset();
      queue_->Taken();
    }
  }

  std::optional<Error> CallOnBreak(const Error& why) {
    return Guard("on_break", [&] {
      if (options_.on_break) options_.on_break(why);
    });
  }

  std::shared_ptr<Link> current() {
    const std::lock_guard lock(mutex_);
    return link_;
  }

  bool closed() {
    const std::lock_guard lock(mutex_);
    return closed_;
  }

  const Gate gate_;
  v1::JudgeOpen open_;
  const JudgeOptions options_;
  v1::JudgeOpened opened_;
  std::shared_ptr<Queue> queue_;
  std::atomic<std::int64_t> break_count_{0};

  std::mutex mutex_;  // guards link_ against Close, and closed_
  std::condition_variable changed_;
  std::shared_ptr<Link> link_;
  bool closed_ = false;

  // Used by run_ alone. broken_ is when the stream broke for the first time since it last went well.
  std::optional<Clock::time_point> broken_;
  milliseconds stuck_, backoff_{0};
  std::mt19937 random_{std::random_device()()};

  std::thread run_, deliver_;
};

JudgeStream::JudgeStream(Gate gate, v1::JudgeOpen open, JudgeOptions options)
    : runner_(std::make_unique<Runner>(std::move(gate), std::move(open), std::move(options))) {}

JudgeStream::~JudgeStream() = default;

const v1::JudgeOpened& JudgeStream::opened() const {
  return runner_->opened();
}

std::int64_t JudgeStream::Push(v1::EventBlock block, Handler handler) {
  return *runner_->queue().Push({&block, std::move(handler), nullptr}, true);
}

std::future<Verdicts> JudgeStream::Push(v1::EventBlock block) {
  auto promise = std::make_shared<std::promise<Verdicts>>();
  std::future<Verdicts> future = promise->get_future();
  runner_->queue().Push({&block, [promise](Verdicts v) { promise->set_value(std::move(v)); },
                         [promise](const Error& e) { promise->set_exception(std::make_exception_ptr(e)); }},
                        true);
  return future;
}

bool JudgeStream::TryPush(v1::EventBlock& block, Handler handler) {
  return runner_->queue().Push({&block, std::move(handler), nullptr}, false).has_value();
}

void JudgeStream::Finish() {
  runner_->queue().Finish();
  runner_->queue().WaitUntilDone();
}

void JudgeStream::Close() {
  runner_->Close();
}

std::int64_t JudgeStream::break_count() const {
  return runner_->break_count();
}

std::int64_t JudgeStream::late_count() const {
  return runner_->queue().late_count();
}

}  // namespace kinegate
