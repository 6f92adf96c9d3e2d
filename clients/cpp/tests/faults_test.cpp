// Streams while servers are killed, frozen, restarted and cut off: no gap, no duplicate, no
// reorder, the bits of an uninterrupted run, and a stall noticed within 3.5 s.
#include <gtest/gtest.h>

#include <algorithm>
#include <atomic>
#include <memory>
#include <thread>

#include "history.h"
#include "process.h"
#include "sample.h"

namespace kinegate::testing {
namespace {

using std::chrono::milliseconds;

const std::vector<std::string> kNone;
constexpr milliseconds kNoticed{3'500};  // S6: a dead peer is found within this time
constexpr milliseconds kBack{3'000};     // L4: a killed server is resumed within this time

class Faults : public ::testing::Test {
 protected:
  const Sample sample_{3000};
  const v1::JudgeOpen open_ = OpenWith(PairSelection());
};

TEST_F(Faults, KillAndRestart) {
  Server server;
  History history(server.address(), open_, sample_);
  std::atomic<bool> over{false};
  milliseconds longest{0};  // from an open gate to the first verdict behind it
  std::thread killer([&] {
    history.Back();
    for (int i = 0; i < 3; ++i) {
      std::this_thread::sleep_for(milliseconds(1'000));
      server.Kill();
      server.Start();
      longest = std::max(longest, history.Back());
    }
    over = true;
  });
  History::Run run;
  run.over = &over;
  run.pause = milliseconds(5);
  const History::Outcome outcome = history.Check(server.address(), open_, run);
  killer.join();
  EXPECT_EQ(outcome.faults, kNone);
  EXPECT_GE(outcome.breaks, 3);
  EXPECT_LT(longest, kBack);
}

TEST_F(Faults, FreezeIsNoticedAndLeftForAnotherServer) {
  Server first("127.0.0.1:" + std::to_string(FreePort())), second("127.0.0.1:" + std::to_string(FreePort()));
  History history(first.address(), open_, sample_);
  // The stream opens while the first alone is awake.
  second.Freeze();
  History::Run run;
  run.rounds = 2;
  run.pause = milliseconds(5);
  run.before = [&](std::size_t block) {
    if (block != 20) return;
    second.Thaw();
    first.Freeze();
    history.Mark();
  };
  const History::Outcome outcome =
      history.Check("ipv4:" + first.address() + "," + second.address(), open_, run);
  first.Thaw();
  EXPECT_EQ(outcome.faults, kNone);
  EXPECT_GE(outcome.breaks, 1);
  EXPECT_GT(outcome.noticed, milliseconds(1'000));
  EXPECT_LT(outcome.noticed, kNoticed);
}

TEST_F(Faults, FreezeAndThawOfTheOnlyServer) {
  Server server;
  History history(server.address(), open_, sample_);
  History::Run run;
  run.rounds = 2;
  run.pause = milliseconds(5);
  std::thread thaw;
  run.before = [&](std::size_t block) {
    if (block != 20) return;
    server.Freeze();
    history.Mark();
    thaw = std::thread([&] {
      std::this_thread::sleep_for(milliseconds(4'500));
      server.Thaw();
    });
  };
  const History::Outcome outcome = history.Check(server.address(), open_, run);
  thaw.join();
  EXPECT_EQ(outcome.faults, kNone);
  EXPECT_LT(outcome.noticed, kNoticed);
  EXPECT_LT(outcome.longest_gap, milliseconds(4'500) + kBack);
}

TEST_F(Faults, RollingRestartOfThree) {
  std::vector<std::unique_ptr<Server>> servers;
  std::string addresses = "ipv4:";
  for (int i = 0; i < 3; ++i) {
    servers.push_back(std::make_unique<Server>("127.0.0.1:" + std::to_string(FreePort())));
    addresses += (i > 0 ? "," : "") + servers.back()->address();
  }
  History history(addresses, open_, sample_);
  std::atomic<bool> over{false};
  std::thread roller([&] {
    for (int turn = 0; turn < 9; ++turn) {
      std::this_thread::sleep_for(milliseconds(300));
      servers[static_cast<std::size_t>(turn) % 3]->Leave();
      servers[static_cast<std::size_t>(turn) % 3]->Start();
    }
    over = true;
  });
  History::Run run;
  run.over = &over;
  run.pause = milliseconds(5);
  const History::Outcome outcome = history.Check(addresses, open_, run);
  roller.join();
  EXPECT_EQ(outcome.faults, kNone);
  EXPECT_GE(outcome.breaks, 3) << "each server left three times";
  EXPECT_LT(outcome.longest_gap, kBack);
}

// Host is a network namespace with one end of a cable to this one.
class Host {
 public:
  Host() {
    Run("ip netns del " + name_);  // of a test that was killed
    const std::string inside = "ip -n " + name_;
    made_ = Run("ip netns add " + name_) &&
            Run("ip link add " + name_ + "a type veth peer name " + name_ + "b netns " + name_) &&
            Run("ip addr add 10.197.13.1/30 dev " + name_ + "a") && Run("ip link set " + name_ + "a up") &&
            Run(inside + " addr add 10.197.13.2/30 dev " + name_ + "b") &&
            Run(inside + " link set " + name_ + "b up") && Run(inside + " link set lo up");
  }
  ~Host() { Run("ip netns del " + name_); }
  Host(const Host&) = delete;
  Host& operator=(const Host&) = delete;

  bool made() const { return made_; }
  std::vector<std::string> Inside() const { return {"ip", "netns", "exec", name_}; }
  // Part drops every packet without a sign, or no longer.
  bool Part(bool parted) const {
    const std::string change = "ip netns exec " + name_ + " iptables " + (parted ? "-I" : "-D") + " ";
    return Run(change + "INPUT -j DROP") && Run(change + "OUTPUT -j DROP");
  }

 private:
  const std::string name_ = "kinegate";
  bool made_ = false;
};

TEST_F(Faults, SilentPartition) {
  const Host host;
  ASSERT_TRUE(host.made()) << "network namespaces need root, ip and iptables";
  Server server("10.197.13.2:8470", {"--unsafe-plaintext-on-the-network"}, host.Inside());
  History history(server.address(), open_, sample_);
  History::Run run;
  run.rounds = 2;
  run.pause = milliseconds(5);
  std::thread heal;
  run.before = [&](std::size_t block) {
    if (block != 20) return;
    EXPECT_TRUE(host.Part(true));
    history.Mark();
    heal = std::thread([&] {
      std::this_thread::sleep_for(milliseconds(5'000));
      EXPECT_TRUE(host.Part(false));
    });
  };
  const History::Outcome outcome = history.Check(server.address(), open_, run);
  heal.join();
  EXPECT_EQ(outcome.faults, kNone);
  EXPECT_GE(outcome.breaks, 1);
  EXPECT_GT(outcome.noticed, milliseconds(1'000));
  EXPECT_LT(outcome.noticed, kNoticed);
}

// The checker itself: a history with a gap, a repeat, a swap or other bits is no true one.
TEST_F(Faults, FalseHistoriesAreFound) {
  Server server;
  const History history(server.address(), open_, sample_);
  JudgeStream stream(Gate(server.address()), open_);
  v1::VerdictBlock block = stream.Push(MakeBlock(sample_.arrays(), 0, 50)).get().block();
  EXPECT_EQ(history.Answered(Verdicts(block), 0, 0, 50), "");
  EXPECT_NE(history.Answered(Verdicts(block), 1, 0, 50), "") << "a gap or a repeat";
  EXPECT_NE(history.Answered(Verdicts(block), 0, 50, 50), "") << "another block's verdict";
  EXPECT_NE(history.Answered(Verdicts(block), 0, 0, 49), "") << "an event too many";
  (*block.mutable_gate())[0] = static_cast<char>(block.gate()[0] ^ 2);
  EXPECT_NE(history.Answered(Verdicts(block), 0, 0, 50), "") << "another decision";
}

}  // namespace
}  // namespace kinegate::testing
