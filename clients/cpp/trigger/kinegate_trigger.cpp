// An example trigger node: takes events from a file at a set rate, or from a ring in shared memory,
// has them judged, and prints latency percentiles, accepts and late events.
//
//   kinegate_trigger --gate unix:/run/kinegate/gate.sock --selection NAME
//                    --events FILE.kgb --rate 50000 --seconds 10
//   kinegate_trigger --gate 127.0.0.1:8470 --selection NAME --ring /kinegate
//
// NAME is a selection that the server knows. Blocks go out when they are full (--block) or when
// their oldest event has waited for --gather_us. Where the stream's queue is full the node waits,
// and that counts as latency.
#include <iostream>
#include <memory>

#include "kinegate/judge_stream.h"
#include "options.h"
#include "report.h"
#include "source.h"

namespace kinegate::trigger {
namespace {

constexpr char kAbout[] =
    "Has events judged, from a .kgb file at a rate (--events) or from a ring in shared memory (--ring),\n"
    "and prints latencies and counts. Blocks go out when they hold --block events or when the oldest\n"
    "has waited for --gather_us.\n"
    "A file keeps every column. The ring carries momentum, theta, phi, class and measured mask of up to\n"
    "16 objects, and up to 16 beam candidates; no covariances, species masks, vertices, vertex groups,\n"
    "cluster positions or polarisation, so that a selection with a fit rejects its blocks. Objects and\n"
    "candidates beyond 16 are counted as objects_left_out. A ring without an event for --silence_s is\n"
    "taken for dead.\n"
    "Exit codes: 0; 1 where the stream failed, blocks were rejected or the ring died; 2 for a bad flag\n"
    "or file.\n"
    "Flags, with their defaults:";
constexpr std::int64_t kMostEvents = 4096;  // of a block

v1::JudgeOpen Opening(const Options& options) {
  v1::JudgeOpen open;
  *open.mutable_selection() = Named(options.text("selection"));
  if (!options.text("budget_ms").empty()) open.set_latency_budget_s(options.number("budget_ms", 1e6) / 1e3);
  return open;
}

JudgeOptions Upkeep(const Options& options) {
  JudgeOptions upkeep;
  if (options.text("late") == "reject") {
    upkeep.late = LatePolicy::kReject;
  } else if (options.text("late") != "accept") {
    throw Error("--late " + options.text("late") + " is neither accept nor reject",
                grpc::StatusCode::INVALID_ARGUMENT);
  }
  upkeep.on_break = [](const Error& why) { std::cerr << "broken: " << why.what() << "\n"; };
  return upkeep;
}

Gate At(const Options& options) {
  if (options.text("ca").empty()) return Gate(options.text("gate"));
  return Gate(options.text("gate"), Tls{options.text("ca"), options.text("certificate"), options.text("key"),
                                        options.text("server_name")});
}

std::unique_ptr<Source> From(const Options& options) {
  if (!options.text("ring").empty()) {
    return FromRing(options.text("ring"),
                    std::chrono::duration<double>(options.number("silence_s", kMostSeconds)));
  }
  return FromFile(options.text("events"), options.number("rate", kMostRate),
                  std::chrono::duration<double>(options.number("seconds", kMostSeconds)));
}

int Main(int argc, char** argv) {
  const Options options(argc, argv,
                        {{"gate", "127.0.0.1:8470"},
                         {"selection", ""},
                         {"events", ""},
                         {"ring", ""},
                         {"rate", "10000"},
                         {"seconds", "10"},
                         {"block", "100"},
                         {"gather_us", "1000"},
                         {"budget_ms", ""},
                         {"late", "accept"},
                         {"silence_s", "10"},
                         {"ca", ""},
                         {"certificate", ""},
                         {"key", ""},
                         {"server_name", ""}});
  if (options.help()) {
    std::cout << kAbout << options.usage() << "\n";
    return 0;
  }
  const auto most = static_cast<std::size_t>(options.whole("block", 1, kMostEvents));
  const std::chrono::microseconds gather(options.whole("gather_us", 1, 1'000'000));
  const auto source = From(options);
  Report report;
  JudgeStream stream(At(options), Opening(options), Upkeep(options));
  const auto begun = Clock::now();
  Batch batch;
  while (source->Take(most, gather, &batch)) {
    stream.Push(
        MakeBlock(batch.arrays, batch.first, batch.count),
        [&report, arrived = batch.arrived](const Verdicts& verdicts) { report.Add(verdicts, arrived); });
  }
  const std::chrono::duration<double> time = Clock::now() - begun;
  stream.Finish();
  report.Print(std::cout, *source, stream.break_count(), time);
  if (!source->fault().empty()) std::cerr << source->fault() << "\n";
  return source->fault().empty() && report.rejected_blocks() == 0 ? 0 : 1;
}

}  // namespace
}  // namespace kinegate::trigger

int main(int argc, char** argv) {
  try {
    return kinegate::trigger::Main(argc, argv);
  } catch (const kinegate::Error& error) {
    std::cerr << error.reason() << (error.reason().empty() ? "" : ": ") << error.what() << "\n";
    return error.code() == grpc::StatusCode::INVALID_ARGUMENT ? 2 : 1;
  }
}
