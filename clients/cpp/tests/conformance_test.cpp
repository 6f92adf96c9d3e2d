// The cases of testdata/rpc: calls against a server, and streams against the double that
// DOUBLE_PROGRAM names and, where a script holds for a server too, against the real one.
#include <google/protobuf/util/json_util.h>
#include <grpcpp/create_channel.h>
#include <grpcpp/impl/client_unary_call.h>
#include <grpcpp/support/byte_buffer.h>
#include <grpcpp/support/sync_stream.h>
#include <gtest/gtest.h>
#include <signal.h>

#include <chrono>
#include <fstream>
#include <map>
#include <memory>
#include <mutex>
#include <sstream>
#include <thread>

#include "case.h"
#include "kinegate/error.h"
#include "kinegate/judge_stream.h"
#include "kinegate/v1/decay.pb.h"
#include "kinegate/v1/generation.pb.h"
#include "kinegate/v1/info.pb.h"
#include "kinegate/v1/particle.pb.h"
#include "kinegate/v1/photon.pb.h"
#include "process.h"

namespace kinegate::testing {
namespace {

const char* const kCodes[] = {
    "OK",        "CANCELLED",      "UNKNOWN",           "INVALID_ARGUMENT",   "DEADLINE_EXCEEDED",
    "NOT_FOUND", "ALREADY_EXISTS", "PERMISSION_DENIED", "RESOURCE_EXHAUSTED", "FAILED_PRECONDITION",
    "ABORTED",   "OUT_OF_RANGE",   "UNIMPLEMENTED",     "INTERNAL",           "UNAVAILABLE",
    "DATA_LOSS", "UNAUTHENTICATED"};

// Invoke makes the call of a case, with messages made from their descriptors. The reply of a stream
// is the list of its messages.
grpc::Status Invoke(const std::shared_ptr<grpc::Channel>& channel, const Json& call, Json* reply) {
  // Naming a message of each file links its services in.
  v1::DescribeDecayRequest::descriptor();
  v1::GetParticleRequest::descriptor();
  v1::DescribePhotonProcessRequest::descriptor();
  v1::GenerateEventsRequest::descriptor();
  v1::GetInfoRequest::descriptor();
  const std::string name = "kinegate.v1." + Member(call, "method").string_value();
  const auto* method = google::protobuf::DescriptorPool::generated_pool()->FindMethodByName(name);
  if (method == nullptr) throw std::runtime_error("there is no method " + name);
  auto* factory = google::protobuf::MessageFactory::generated_factory();
  const std::unique_ptr<google::protobuf::Message> in(factory->GetPrototype(method->input_type())->New());
  const std::unique_ptr<google::protobuf::Message> out(factory->GetPrototype(method->output_type())->New());
  Fill(Member(call, "request"), in.get());
  grpc::ClientContext context;
  context.set_deadline(std::chrono::system_clock::now() + std::chrono::seconds(10));
  const std::string path = "/" + method->service()->full_name() + "/" + method->name();
  const grpc::Slice slice(in->SerializeAsString());
  const grpc::ByteBuffer request(&slice, 1);
  grpc::ByteBuffer response;
  const auto form = [&] {
    grpc::Slice whole;
    EXPECT_TRUE(response.DumpToSingleSlice(&whole).ok());
    EXPECT_TRUE(out->ParseFromArray(whole.begin(), static_cast<int>(whole.size())));
    return Form(*out);
  };
  using grpc::internal::RpcMethod;
  if (method->server_streaming()) {
    const RpcMethod rpc(path.c_str(), RpcMethod::SERVER_STREAMING, channel);
    const std::unique_ptr<grpc::ClientReader<grpc::ByteBuffer>> reader(
        grpc::internal::ClientReaderFactory<grpc::ByteBuffer>::Create(channel.get(), rpc, &context, request));
    auto* messages = reply->mutable_list_value();
    while (reader->Read(&response)) *messages->add_values() = form();
    return reader->Finish();
  }
  const RpcMethod rpc(path.c_str(), RpcMethod::NORMAL_RPC, channel);
  const grpc::Status status =
      grpc::internal::BlockingUnaryCall(channel.get(), rpc, &context, request, &response);
  if (status.ok()) *reply = form();
  return status;
}

TEST(Conformance, Calls) {
  const Folder folder;
  Server server("",
                {"--selection-files", CaseFile("pairs.yaml"), "--general-address", "unix:" + (folder / "g")});
  const auto channel = grpc::CreateChannel("unix:" + (folder / "g"), grpc::InsecureChannelCredentials());
  for (const auto& [name, call] : ReadCases("calls")) {
    SCOPED_TRACE(name);
    Json reply;
    const grpc::Status status = Invoke(channel, call, &reply);
    const Json& failure = Member(call, "failure");
    if (!failure.has_struct_value()) {
      ASSERT_TRUE(status.ok()) << status.error_message();
      EXPECT_EQ(Differ("", Member(call, "reply"), reply, kTolerance), "");
      continue;
    }
    const Error error = Error::FromStatus(status);
    EXPECT_EQ(kCodes[error.code()], Member(failure, "code").string_value());
    EXPECT_EQ(error.reason(), Member(failure, "reason").string_value());
    const std::string field = Member(failure, "field").string_value();
    bool named = field.empty();
    for (const FieldViolation& violation : error.violations()) named = named || violation.field == field;
    EXPECT_TRUE(named) << field;
  }
}

TEST(Conformance, CallsCanFail) {
  v1::EventBlock block;
  block.set_sequence(3);
  const Json came = Form(block);
  for (const char* due : {"{\"sequence\": \"4\"}", "{\"sequence\": 3}", "{\"sequence\": null}",
                          "{\"other\": 1}", "{\"beam\": {}}", "{\"sequence\": [\"3\"]}"}) {
    Json value;
    Fill(came, &value);
    ASSERT_TRUE(google::protobuf::util::JsonStringToMessage(due, &value).ok());
    EXPECT_NE(Differ("", value, came, kTolerance), "") << due;
  }
}

// Outcome is what came of the blocks of a script.
struct Outcome {
  std::vector<v1::VerdictBlock> verdicts;
  std::vector<v1::SelectionOutline> outlines;  // of each
  bool failed = false;
};

Outcome Judge(const std::string& address, const Json& script, const std::string& late) {
  v1::JudgeOpen open;
  *open.mutable_selection() = Named("pairs");
  open.set_follow(Member(script, "follow").bool_value());
  open.set_first_sequence(static_cast<std::int64_t>(Member(script, "first_sequence").number_value()));
  JudgeOptions options;
  options.late = late == "reject" ? LatePolicy::kReject : LatePolicy::kAccept;
  const auto& blocks = Member(script, "blocks").list_value().values();
  options.queue_block_count = blocks.size();
  Outcome outcome;
  JudgeStream stream(Gate(address), open, options);
  try {
    for (const Json& form : blocks) {
      v1::EventBlock block;
      Fill(form, &block);
      stream.Push(std::move(block), [&](const Verdicts& v) {
        outcome.verdicts.push_back(v.block());
        outcome.outlines.push_back(v.outline());
      });
    }
    stream.Finish();
  } catch (const Error&) {
    outcome.failed = true;
  }
  return outcome;
}

// Breach says which rule the outcome breaks, empty for none.
std::string Breach(const Json& script, const Outcome& outcome) {
  const std::string rule = Member(script, "rule").string_value() + ": ";
  if (outcome.failed != Member(script, "fails").bool_value()) return rule + "the end of the stream";
  const auto& due = Member(script, "verdicts").list_value().values();
  if (static_cast<std::size_t>(due.size()) != outcome.verdicts.size()) return rule + "the number of verdicts";
  for (int i = 0; i < due.size(); ++i) {
    const std::string differ = Differ("", due[i], Form(outcome.verdicts[static_cast<std::size_t>(i)]), 0);
    if (!differ.empty()) return rule + differ;
  }
  const auto& outlines = Member(script, "outlines").list_value().values();
  for (int i = 0; i < outlines.size(); ++i) {
    const std::string differ =
        Differ("", outlines[i], Form(outcome.outlines[static_cast<std::size_t>(i)]), 0);
    if (!differ.empty()) return rule + "outline" + differ;
  }
  return "";
}

// Play has a script played by the double and returns what it says.
std::string Play(const std::string& name, const Json& script, const std::string& late, Outcome* outcome) {
  const Folder folder;
  const std::string address = "unix:" + (folder / "s"), log = folder / "log";
  const auto said = [&log] {
    std::ifstream file(log);
    std::ostringstream text;
    text << file.rdbuf();
    return text.str();
  };
  Process process;
  process.Start({Program("DOUBLE_PROGRAM"), CaseFile("streams/" + name + ".json"), address}, log);
  for (int looks = 0; looks < 500 && said().empty(); ++looks) {
    std::this_thread::sleep_for(std::chrono::milliseconds(10));
  }
  *outcome = Judge(address, script, late);
  process.Signal(SIGTERM);
  process.Wait();
  return said();
}

TEST(Conformance, Streams) {
  for (const auto& [name, script] : ReadCases("streams")) {
    SCOPED_TRACE(name);
    const std::string against = Member(script, "against").string_value();
    if (against == "server") continue;
    Outcome outcome;
    EXPECT_EQ(Play(name, script, Member(script, "late").string_value(), &outcome), "listening\nheld\n");
    EXPECT_EQ(Breach(script, outcome), "");
    if (against != "both") continue;
    Server server("", {"--selection-files", CaseFile("pairs.yaml")});
    EXPECT_EQ(Breach(script, Judge(server.address(), script, "accept")), "");
  }
}

TEST(Conformance, StreamsCanFail) {
  const auto scripts = ReadCases("streams");
  const Json& script = scripts.at("late-accept");
  Outcome outcome;
  Play("late-accept", script, "reject", &outcome);
  EXPECT_EQ(Breach(script, outcome).rfind("late policy: ", 0), 0U);
}

}  // namespace
}  // namespace kinegate::testing
