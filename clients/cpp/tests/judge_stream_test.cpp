// A stream over a healthy server: order, bounds, late policy, refusals, transports.
#include "kinegate/judge_stream.h"

#include <gtest/gtest.h>
#include <openssl/crypto.h>
#include <unistd.h>

#include <atomic>
#include <cstdlib>
#include <thread>

#include "blockfile.h"
#include "history.h"
#include "process.h"
#include "sample.h"

namespace kinegate::testing {
namespace {

using std::chrono::milliseconds;

TEST(JudgeStream, AnswersInOrderWithTheSameBitsForAnyBlockSize) {
  Server server;
  const Sample sample(3000);
  v1::JudgeOpen open = OpenWith(PairSelection());
  open.set_first_sequence(41);
  History history(server.address(), open, sample);
  for (std::size_t per_block : {1000, 100, 7}) {
    History::Run run;
    run.per_block = per_block;
    EXPECT_EQ(history.Check(server.address(), open, run).faults, std::vector<std::string>());
  }
}

TEST(JudgeStream, FuturesHoldVerdictsAndTheOpeningIsKnown) {
  Server server;
  const Sample sample(10);
  JudgeStream stream(Gate(server.address()), OpenWith(PairSelection()));
  EXPECT_EQ(stream.opened().selection().selection_digest().size(), 64U);
  EXPECT_EQ(stream.opened().selection().hypotheses(0).observables(0), "mass");
  auto first = stream.Push(MakeBlock(sample.arrays(), 0, 6));
  auto second = stream.Push(MakeBlock(sample.arrays(), 6, 4));
  EXPECT_EQ(second.get().sequence(), 1);
  const Verdicts verdicts = first.get();
  EXPECT_EQ(verdicts.digest(), stream.opened().selection().selection_digest());
  ASSERT_FALSE(verdicts.entries(0).empty());
  EXPECT_EQ(verdicts.entries(0)[0].observables.size(), 1U);
  stream.Finish();
  EXPECT_THROW(stream.Push(MakeBlock(sample.arrays())), Error);
}

TEST(JudgeStream, EntriesCarryUncertaintiesAndFits) {
  const std::string data = Program("RPC_CASES") + "/..";
  Server server("", {"--selection-files", data + "/selections/two-pions.yaml"});
  const trigger::Events events = trigger::ReadBlockFile(data + "/simulated/two-pions.kgb");
  v1::JudgeOpen open;
  *open.mutable_selection() = Named("two-pions");
  open.set_entries(v1::ENTRY_DETAIL_ALL);
  open.mutable_limits()->set_block_event_count(20);
  open.mutable_limits()->set_block_object_count(400);
  JudgeStream stream(Gate(server.address()), open);
  const Verdicts verdicts = stream.Push(MakeBlock(events.arrays(), 0, 20)).get();
  int accepted = 0;
  for (std::size_t i = 0; i < verdicts.event_count(); ++i) {
    for (const Entry& entry : verdicts.entries(i)) {
      EXPECT_GE(entry.assignment_count, 1);
      ASSERT_EQ(entry.uncertainties.size(), 2U);
      ASSERT_TRUE(entry.fit.has_value());
      if (entry.status != v1::ENTRY_STATUS_ACCEPTED) continue;
      ++accepted;
      EXPECT_GT(entry.uncertainties[0], 0);
      EXPECT_EQ(entry.fit->status, v1::FIT_STATUS_CONVERGED);
      EXPECT_EQ(entry.fit->degrees_of_freedom, 5);
      EXPECT_GT(entry.fit->chi_square, 0);
      EXPECT_EQ(entry.fit->probability, entry.observables[1]) << "which the selection records too";
      EXPECT_GE(entry.fit->iteration_count, 1);
    }
  }
  EXPECT_GT(accepted, 0);
}

TEST(JudgeStream, AFullQueueRefusesAtOnceAndWaitsOnPush) {
  Server server;
  const Sample sample(10);
  JudgeOptions options;
  options.queue_block_count = 2;
  JudgeStream stream(Gate(server.address()), OpenWith(PairSelection()), options);
  std::promise<void> go;
  const std::shared_future<void> gone = go.get_future().share();
  std::atomic<int> handled{0};
  const auto handler = [&](const Verdicts&) {
    gone.wait();
    ++handled;
  };
  v1::EventBlock block = MakeBlock(sample.arrays());
  EXPECT_TRUE(stream.TryPush(block, handler));
  block = MakeBlock(sample.arrays());
  EXPECT_TRUE(stream.TryPush(block, handler));
  block = MakeBlock(sample.arrays());
  EXPECT_FALSE(stream.TryPush(block, handler)) << "the handlers hold both places";
  EXPECT_EQ(block.event_ids().size(), 80U) << "a refused block is left alone";
  std::thread later([&] {
    std::this_thread::sleep_for(milliseconds(50));
    go.set_value();
  });
  EXPECT_EQ(stream.Push(std::move(block), handler), 2);
  later.join();
  stream.Finish();
  EXPECT_EQ(handled, 3);
}

TEST(JudgeStream, LateEventsFollowThePolicy) {
  Server server;
  const Sample sample(100);
  v1::JudgeOpen open = OpenWith(PairSelection());
  open.set_latency_budget_s(1e-9);
  for (const LatePolicy policy : {LatePolicy::kAccept, LatePolicy::kReject}) {
    JudgeOptions options;
    options.late = policy;
    JudgeStream stream(Gate(server.address()), open, options);
    const Verdicts verdicts = stream.Push(MakeBlock(sample.arrays())).get();
    for (std::size_t i = 0; i < verdicts.event_count(); ++i) {
      ASSERT_TRUE(verdicts.late(i));
      ASSERT_EQ(verdicts.gate(i), policy == LatePolicy::kAccept);
    }
    EXPECT_EQ(stream.late_count(), 100);
    stream.Finish();
  }
}

TEST(JudgeStream, ABadBlockIsRejectedAndTheStreamGoesOn) {
  Server server;
  const Sample sample(10);
  JudgeStream stream(Gate(server.address()), OpenWith(PairSelection()));
  v1::EventBlock bad = MakeBlock(sample.arrays());
  bad.mutable_object_classes()->back() = 100;
  const Verdicts rejected = stream.Push(std::move(bad)).get();
  EXPECT_TRUE(rejected.rejected());
  EXPECT_EQ(rejected.rejection().reason(), "BLOCK_INVALID");
  EXPECT_EQ(rejected.event_count(), 0U);
  EXPECT_EQ(stream.Push(MakeBlock(sample.arrays())).get().event_count(), 10U);
  stream.Finish();
  EXPECT_EQ(stream.break_count(), 0);
}

TEST(JudgeStream, AHandlerThatThrowsEndsTheStreamWithItsError) {
  Server server;
  const Sample sample(10);
  for (const bool last : {true, false}) {
    JudgeStream stream(Gate(server.address()), OpenWith(PairSelection()));
    stream.Push(MakeBlock(sample.arrays()), [](const Verdicts&) { throw std::runtime_error("disk full"); });
    if (!last) std::this_thread::sleep_for(milliseconds(300));
    try {
      if (!last) stream.Push(MakeBlock(sample.arrays()));
      stream.Finish();
      ADD_FAILURE() << "the stream ended well";
    } catch (const Error& error) {
      EXPECT_NE(std::string(error.what()).find("disk full"), std::string::npos) << error.what();
    }
  }
  JudgeStream stream(Gate(server.address()), OpenWith(PairSelection()));
  stream.Push(MakeBlock(sample.arrays()), [](const Verdicts&) { throw 7; });
  EXPECT_THROW(stream.Finish(), Error);
}

TEST(JudgeStream, OnBreakThatThrowsEndsTheStreamWithItsError) {
  Server server;
  const Sample sample(10);
  JudgeOptions options;
  options.on_break = [](const Error&) { throw std::runtime_error("no pager"); };
  JudgeStream stream(Gate(server.address()), OpenWith(PairSelection()), options);
  server.Kill();
  try {
    stream.Push(MakeBlock(sample.arrays())).get();
    ADD_FAILURE() << "a verdict of a dead server";
  } catch (const Error& error) {
    EXPECT_NE(std::string(error.what()).find("no pager"), std::string::npos) << error.what();
  }
}

TEST(JudgeStream, RefusalsCarryReasonAndField) {
  Server server;
  v1::JudgeOpen open;
  *open.mutable_selection() = Named("none");
  try {
    JudgeStream stream(Gate(server.address()), open);
    FAIL() << "an unknown selection was opened";
  } catch (const Error& error) {
    EXPECT_EQ(error.reason(), "SELECTION_NOT_FOUND");
    EXPECT_EQ(error.code(), grpc::StatusCode::NOT_FOUND);
  }
  open = OpenWith(PairSelection());
  open.set_latency_budget_s(-1);
  try {
    JudgeStream stream(Gate(server.address()), open);
    FAIL() << "a negative budget was opened";
  } catch (const Error& error) {
    ASSERT_EQ(error.violations().size(), 1U);
    EXPECT_EQ(error.violations()[0].field, "open.latency_budget_s");
  }
}

TEST(JudgeStream, NobodyThereIsToldInTime) {
  JudgeOptions options;
  options.opening = milliseconds(300);
  const auto begun = std::chrono::steady_clock::now();
  EXPECT_THROW(
      JudgeStream(Gate("127.0.0.1:" + std::to_string(FreePort())), OpenWith(PairSelection()), options),
      Error);
  EXPECT_LT(std::chrono::steady_clock::now() - begun, std::chrono::seconds(3));
}

TEST(JudgeStream, HeartbeatsKeepASilentStreamOpen) {
  Server server("", {"--stream-idle", "2s"});
  const Sample sample(10);
  JudgeStream stream(Gate(server.address()), OpenWith(PairSelection()));
  std::this_thread::sleep_for(milliseconds(5'000));
  EXPECT_EQ(stream.Push(MakeBlock(sample.arrays())).get().event_count(), 10U);
  EXPECT_EQ(stream.break_count(), 0);
}

TEST(JudgeStream, CloseEndsAtOnceAndFuturesTell) {
  Server server;
  const Sample sample(10);
  auto stream = std::make_unique<JudgeStream>(Gate(server.address()), OpenWith(PairSelection()));
  server.Freeze();
  auto never = stream->Push(MakeBlock(sample.arrays()));
  const auto begun = std::chrono::steady_clock::now();
  stream->Close();
  EXPECT_THROW(never.get(), Error);
  EXPECT_THROW(stream->Finish(), Error);
  stream.reset();
  EXPECT_LT(std::chrono::steady_clock::now() - begun, std::chrono::seconds(1));
}

// Handlers hold what the caller gave them, which may refer to what is gone by the next line.
TEST(JudgeStream, AfterFinishNoHandlerIsLeft) {
  Server server;
  const Sample sample(10);
  JudgeStream stream(Gate(server.address()), OpenWith(PairSelection()));
  std::atomic<bool> gone{false};
  const auto leave = [&gone](const int*) {
    std::this_thread::sleep_for(milliseconds(100));
    gone = true;
  };
  stream.Push(MakeBlock(sample.arrays()), [held = std::shared_ptr<int>(nullptr, leave)](const Verdicts&) {});
  stream.Finish();
  EXPECT_TRUE(gone);
}

TEST(JudgeStream, AfterTheStreamNoHandlerIsLeftThoughItsBlockIsStillBeingSent) {
  Server server;
  const Sample sample(20'000);
  auto stream = std::make_unique<JudgeStream>(Gate(server.address()), OpenWith(PairSelection()));
  server.Freeze();
  const auto held = std::make_shared<int>();
  // More bytes than the buffers between here and a frozen server hold.
  stream->Push(MakeBlock(sample.arrays()), [held](const Verdicts&) {});
  std::this_thread::sleep_for(milliseconds(300));
  stream.reset();
  EXPECT_EQ(held.use_count(), 1);
}

// MakeCertificates makes an authority and a pair for each of "server" and "client".
bool MakeCertificates(const Folder& folder) {
  const std::string quiet =
      "openssl req -x509 -newkey ec -pkeyopt ec_paramgen_curve:prime256v1 -nodes -days 1 ";
  if (!Run(quiet + "-subj /CN=authority -keyout " + (folder / "ca.key") + " -out " + (folder / "ca.pem")))
    return false;
  for (const std::string name : {"server", "client"}) {
    if (!Run(quiet + "-CA " + (folder / "ca.pem") + " -CAkey " + (folder / "ca.key") + " -subj /CN=" + name +
             " -addext subjectAltName=DNS:localhost,IP:127.0.0.1 -addext basicConstraints=critical,CA:FALSE" +
             " -keyout " + (folder / (name + ".key")) + " -out " + (folder / (name + ".pem")))) {
      return false;
    }
  }
  return true;
}

TEST(JudgeStream, MutualTlsOverTcp) {
  const Folder folder;
  ASSERT_TRUE(MakeCertificates(folder));
  const std::string address = "127.0.0.1:" + std::to_string(FreePort());
  Server server(address, {"--certificate-file", folder / "server.pem", "--key-file", folder / "server.key",
                          "--client-ca-file", folder / "ca.pem"});
  const Sample sample(10);
  const Tls both{folder / "ca.pem", folder / "client.pem", folder / "client.key", ""};
  JudgeStream stream(Gate(address, both), OpenWith(PairSelection()));
  EXPECT_EQ(stream.Push(MakeBlock(sample.arrays())).get().event_count(), 10U);
  stream.Finish();

  JudgeOptions options;
  options.opening = milliseconds(700);
  const Tls nameless{folder / "ca.pem", "", "", ""};
  EXPECT_THROW(JudgeStream(Gate(address, nameless), OpenWith(PairSelection()), options), Error);
  EXPECT_THROW(JudgeStream(Gate(address), OpenWith(PairSelection()), options), Error);
  EXPECT_THROW(Gate(address, Tls{folder / "none.pem", "", "", ""}), Error);
  EXPECT_THROW(Gate(address, Tls{"", folder / "client.pem", "", ""}), Error);
}

// Threads of the transport live on while a process ends, and use what OpenSSL would free then.
TEST(JudgeStream, OpenSslIsThereUntilTheProcessIsGone) {
  GTEST_FLAG_SET(death_test_style, "threadsafe");
  const auto leave = [] {
    // Registered before OpenSSL could, and so called after its own, which would end all use of it.
    std::atexit([] { ::_exit(OPENSSL_init_crypto(0, nullptr) == 1 ? 0 : 1); });
    const std::string nobody = "127.0.0.1:" + std::to_string(FreePort());
    JudgeOptions options;
    options.opening = milliseconds(300);
    for (const Gate& gate : {Gate(nobody), Gate(nobody, Tls{})}) {
      EXPECT_THROW(JudgeStream(gate, OpenWith(PairSelection()), options), Error);
    }
    std::exit(2);
  };
  EXPECT_EXIT(leave(), ::testing::ExitedWithCode(0), "");
}

}  // namespace
}  // namespace kinegate::testing
